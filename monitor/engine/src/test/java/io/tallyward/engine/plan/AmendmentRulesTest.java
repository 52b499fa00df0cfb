package io.tallyward.engine.plan;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.engine.Plans;
import io.tallyward.engine.plan.TestPlan.SpendingClock;
import java.time.Duration;
import java.time.Instant;
import java.util.Collections;
import java.util.List;
import java.util.Map;
import java.util.Optional;
import org.junit.jupiter.api.Test;

class AmendmentRulesTest {

    private static final Instant DAY_1 = Plans.FROM.plus(Duration.ofDays(1));
    private static final Instant DAY_2 = Plans.FROM.plus(Duration.ofDays(2));
    private static final Instant DAY_3 = Plans.FROM.plus(Duration.ofDays(3));
    private static final Instant DAY_5 = Plans.FROM.plus(Duration.ofDays(5));
    private static final Instant DAY_9 = Plans.FROM.plus(Duration.ofDays(9));

    private static Amendment amendment(Instant at, Amendment.Change change) {
        return new Amendment(at, "the timetable changes", change);
    }

    private static Amendment end(Instant at, Instant end) {
        return amendment(at, new Amendment.End(end));
    }

    private static Amendment shares(Instant at, double plain, double wide) {
        return amendment(at, new Amendment.Shares(Map.of("plain", plain, "wide", wide)));
    }

    private static void assertAllowed(Plans plan, Amendment... amendments) {
        assertEquals(Optional.empty(), AmendmentRules.problem(plan.build().amended(List.of(amendments))));
    }

    private static void assertRefused(String words, Plans plan, Amendment... amendments) {
        Optional<AmendmentRules.Problem> problem =
                AmendmentRules.problem(plan.build().amended(List.of(amendments)));
        assertTrue(problem.isPresent(), words);
        assertTrue(problem.get().toString().contains(words), problem.get().toString());
    }

    private static Plans plan() {
        return Plans.plan("quay-banner");
    }

    @Test
    void theEndMayMoveEitherWay() {
        assertAllowed(plan(), end(DAY_1, DAY_9), end(DAY_2, DAY_3));
        assertEquals(
                DAY_3,
                plan().build()
                        .amended(List.of(end(DAY_1, DAY_9), end(DAY_2, DAY_3)))
                        .end());
    }

    @Test
    void theSplitMayChangeAndTheOwnerMayStop() {
        assertAllowed(plan(), shares(DAY_1, 0.1, 0.9), shares(DAY_2, 0.5, 0.5), amendment(DAY_3, new Amendment.Stop()));
        Plan stopped = plan().build().amended(List.of(shares(DAY_1, 0.1, 0.9), amendment(DAY_3, new Amendment.Stop())));
        assertEquals(DAY_3, stopped.end());
        assertEquals(2, stopped.epochCount());
        assertEquals(0, stopped.epochAt(DAY_1.toEpochMilli() - 1));
        assertEquals(1, stopped.epochAt(DAY_1.toEpochMilli()));
        assertEquals(0.9, stopped.sharesIn(1)[1]);
    }

    @Test
    void anAmendmentComesAfterEverythingThatTookEffectBefore() {
        assertRefused("after", plan(), end(DAY_2, DAY_9), shares(DAY_2, 0.4, 0.6));
        assertRefused("after", plan(), shares(Plans.FROM, 0.4, 0.6));
        assertRefused(
                "after",
                plan().epochs(new AllocationEpoch(DAY_2, Map.of("plain", 0.2, "wide", 0.8))),
                shares(DAY_1, 0.4, 0.6));
    }

    @Test
    void aStopAndAnEndNeedNotWaitForARampAndAStopOvertakesEverything() {
        Plans ramp = plan().epochs(new AllocationEpoch(DAY_3, Map.of("plain", 0.2, "wide", 0.8)));
        assertAllowed(ramp, amendment(DAY_1, new Amendment.Stop()));
        assertAllowed(ramp, end(DAY_1, DAY_9));
        assertAllowed(plan(), shares(DAY_3, 0.4, 0.6), amendment(DAY_2, new Amendment.Stop()));
        assertEquals(
                List.of(amendment(DAY_2, new Amendment.Stop())),
                plan().build()
                        .amended(List.of(shares(DAY_3, 0.4, 0.6), amendment(DAY_2, new Amendment.Stop())))
                        .amendmentsInForce());
    }

    @Test
    void nothingIsAmendedAfterTheRun() {
        assertRefused("before the end of the run", plan(), end(DAY_5, DAY_9));
        assertRefused("before the end of the run", plan(), end(DAY_1, DAY_2), shares(DAY_2, 0.4, 0.6));
    }

    @Test
    void momentsAreStartsOfWindows() {
        assertRefused("start of a window", plan(), shares(DAY_1.plusSeconds(1), 0.4, 0.6));
        assertRefused("start of a window", plan(), end(DAY_1, DAY_3.plusSeconds(1)));
    }

    @Test
    void aRunHasALengthThatCountsCanHold() {
        assertRefused("at most", plan(), end(DAY_1, Plans.FROM.plus(Duration.ofDays(398))));
        assertRefused("after", plan(), end(DAY_2, DAY_1));
    }

    @Test
    void alphaThatIsSpentByTheCalendarLeavesNothingForLonger() {
        assertRefused("calendar", plan().clock(SpendingClock.CALENDAR), end(DAY_1, DAY_9));
        assertAllowed(plan().clock(SpendingClock.CALENDAR), end(DAY_1, DAY_3));
    }

    @Test
    void sharesAreThoseOfEveryVariantAndAddUp() {
        assertRefused("add up to 1.1", plan(), shares(DAY_1, 0.5, 0.6));
        assertRefused("between 0 and 1", plan(), shares(DAY_1, 0, 1));
        assertRefused(
                "share of every variant",
                plan(),
                amendment(DAY_1, new Amendment.Shares(Map.of("plain", 0.5, "tall", 0.5))));
    }

    @Test
    void everyAmendmentHasAReason() {
        assertRefused("reason", plan(), new Amendment(DAY_1, " ", new Amendment.Stop()));
        assertRefused("reason", plan(), new Amendment(DAY_1, "x".repeat(501), new Amendment.Stop()));
    }

    @Test
    void thereAreNotManyOfThem() {
        assertRefused(
                "at most 100",
                plan(),
                Collections.nCopies(101, end(DAY_1, DAY_9)).toArray(Amendment[]::new));
    }
}
