package io.tallyward.engine.decide;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertNotNull;
import static org.junit.jupiter.api.Assertions.assertNull;
import static org.junit.jupiter.api.Assertions.assertThrows;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.engine.Plans;
import io.tallyward.engine.count.SealCause;
import io.tallyward.engine.count.TallyUpdate;
import io.tallyward.engine.count.WindowTally;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.PlanChangedException;
import io.tallyward.engine.plan.PlanDigest;
import io.tallyward.engine.plan.Spending;
import io.tallyward.engine.plan.Spending.Family;
import io.tallyward.engine.plan.TestPlan.Better;
import io.tallyward.engine.plan.TestPlan.Sides;
import io.tallyward.engine.plan.TrustLimits;
import io.tallyward.engine.plan.Variant;
import io.tallyward.engine.record.DecisionRecord;
import io.tallyward.engine.record.DecisionRecord.Comparison;
import io.tallyward.engine.record.DecisionRecord.Occasion;
import io.tallyward.engine.record.DecisionRecord.VariantCount;
import io.tallyward.engine.record.Notice;
import io.tallyward.engine.record.Trust;
import io.tallyward.engine.record.Verdict;
import java.time.Duration;
import java.util.List;
import java.util.Map;
import org.junit.jupiter.api.Test;

/**
 * Looks and verdicts by small examples. Windows are days, a look is due every day. A day of 1000 trials and 200 successes in
 * each arm brings a fifth of the maximum information of {@link #FIVE_DAYS}, so its looks fall at 0.2, 0.4, ... 1.
 */
class DecideShardTest {

    /** Per-tail spending at 0.2, 0.4, ... 1: two-sided 0.05, O'Brien-Fleming type; reference value, 80 % power. */
    private static final double DRIFT_OF_FIVE_LOOKS = 2.836001250142;

    /** Boundaries of the same design; an independent reference computation, checked against published tables. */
    private static final double[] BOUNDARIES = {
        4.87688494879076, 3.35701192157464, 2.68028006454499, 2.28981676771195, 2.03103204331006
    };

    /** Cumulative alpha of the same design. */
    private static final double[] SPENT = {
        1.07774252581175e-06, 0.000788303513382373, 0.00761612662197866, 0.0244235806928962, 0.05
    };

    /** Information of a day: 1000 / 2 / (0.2 * 0.8) = 3125, and five of them are 125 squared. */
    private static final double EFFECT = DRIFT_OF_FIVE_LOOKS / 125;

    private static final Plan FIVE_DAYS = fiveDays().build();

    private static Plans fiveDays() {
        return days("quay-banner").smallestEffect(EFFECT);
    }

    private static Plans days(String experiment) {
        return Plans.plan(experiment)
                .counting(Duration.ofMinutes(30), Duration.ofMinutes(10), Duration.ofDays(1))
                .trust(new TrustLimits(0.02, 0.02, 0.05, Duration.ofDays(30)));
    }

    private final DecideHost host = new DecideHost(FIVE_DAYS);

    @Test
    void waitsBeforeTheFirstWindow() {
        host.take(DecideHost.update(FIVE_DAYS, 0, 1, 0));
        assertEquals(Verdict.WAITING, host.view().verdict());
        assertTrue(host.view().completeUntil().isEmpty());
        assertEquals(List.of(), host.decisions());
    }

    @Test
    void takesFiveLooksAtTheReferenceBoundariesAndSpendsAllAlpha() {
        for (int day = 0; day < 5; day++) {
            host.next(1000, 200, 1000, 200);
            Comparison look = host.lastLook();
            assertEquals(day + 1, look.look());
            assertEquals((day + 1) / 5.0, look.informationFraction(), 1e-9);
            assertEquals(0, look.z(), 0);
            assertEquals(BOUNDARIES[day], look.upper(), 1e-6, "upper boundary of look " + look.look());
            assertEquals(-BOUNDARIES[day], look.lower(), 1e-6, "lower boundary of look " + look.look());
            assertEquals(SPENT[day], look.alphaSpent(), 1e-9, "alpha spent by look " + look.look());
            assertNull(look.futility());
            assertEquals(day < 4 ? Verdict.CONTINUE : Verdict.EXHAUSTED, look.verdict());
        }
        assertEquals(List.of("exhausted wide"), host.noticeKinds());
        assertEquals(5, host.view().looksTaken());
        assertEquals(0, host.view().looksDelayed());
    }

    @Test
    void spendsAllAlphaAtTheEndOfTheRunHoweverLittleInformationThereIs() {
        host.next(1000, 200, 1000, 200).quiet(3).next(10, 2, 10, 2);
        Comparison last = host.lastLook();
        assertEquals(0.05, last.alphaSpent(), 1e-15);
        assertTrue(last.informationFraction() < 0.21);
        assertEquals(Verdict.EXHAUSTED, last.verdict());
    }

    @Test
    void spendsAllAlphaWhenTheInformationIsUsedUpBeforeTheEnd() {
        host.next(6000, 1200, 6000, 1200);
        assertEquals(0.05, host.lastLook().alphaSpent(), 1e-15);
        assertEquals(1.959963984540054, host.lastLook().upper(), 1e-9, "a single look is a plain test");
        assertEquals(Verdict.EXHAUSTED, host.lastLook().verdict());
        assertTrue(host.lastLook().informationFraction() > 1);
    }

    @Test
    void stopsForBenefitAtTheBoundaryAndTellsIt() {
        host.next(1000, 200, 1000, 260).next(1000, 200, 1000, 260);
        Comparison look = host.lastLook();
        assertEquals(2, look.look());
        assertEquals(Verdict.STOP_BENEFIT, look.verdict());
        assertEquals(Verdict.STOP_BENEFIT, host.lastDecision().verdict());
        assertTrue(look.z() >= look.upper());
        Notice notice = host.notices().get(0);
        assertEquals(Notice.Kind.STOP, notice.kind());
        assertEquals(Notice.Severity.TICKET, notice.severity());
        assertEquals(host.lastDecision().hash(), notice.decision());
        assertEquals("400", notice.facts().get("successes.plain"));
        assertEquals("2000", notice.facts().get("trials.wide"));
    }

    @Test
    void stopsForHarmAndWakesSomebody() {
        host.next(1000, 200, 1000, 140).next(1000, 200, 1000, 140);
        assertEquals(Verdict.STOP_HARM, host.lastDecision().verdict());
        assertEquals(Notice.Severity.PAGE, host.notices().get(0).severity());
        assertTrue(
                host.lastLook().reason().contains("harm boundary"),
                host.lastLook().reason());
    }

    /** The boundary of the second look is 3.357; these counts give z of 3.31 and 3.43, either way. */
    @Test
    void stopsJustBeyondTheBoundaryAndNotJustWithinIt() {
        long[][] counts = {{180, 222}, {179, 223}, {222, 180}, {223, 179}};
        Verdict[] expected = {Verdict.CONTINUE, Verdict.STOP_BENEFIT, Verdict.CONTINUE, Verdict.STOP_HARM};
        for (int i = 0; i < counts.length; i++) {
            DecideHost close = new DecideHost(FIVE_DAYS);
            close.next(1000, counts[i][0], 1000, counts[i][1]).next(1000, counts[i][0], 1000, counts[i][1]);
            assertEquals(
                    expected[i], close.lastLook().verdict(), close.lastLook().toString());
        }
    }

    @Test
    void hasNoHarmBoundaryInAOneSidedTest() {
        Plan plan = fiveDays().sides(Sides.ONE).alpha(0.025).build();
        DecideHost oneSided = new DecideHost(plan);
        for (int day = 0; day < 5; day++) {
            oneSided.next(1000, 230, 1000, 170);
            assertNull(oneSided.lastLook().lower());
            assertNull(oneSided.lastLook().differenceUpper());
            assertEquals(BOUNDARIES[day], oneSided.lastLook().upper(), 1e-6, "look " + (day + 1));
        }
        assertEquals(Verdict.EXHAUSTED, oneSided.lastDecision().verdict());
    }

    @Test
    void callsALowerRateABenefitWhereLowerIsBetter() {
        Plan plan = fiveDays().better(Better.LOWER).build();
        DecideHost lower = new DecideHost(plan).next(1000, 200, 1000, 140).next(1000, 200, 1000, 140);
        assertEquals(Verdict.STOP_BENEFIT, lower.lastDecision().verdict());
        assertTrue(lower.lastLook().z() < 0, "z stays variant minus control");
        DecideHost higher = new DecideHost(plan).next(1000, 200, 1000, 260).next(1000, 200, 1000, 260);
        assertEquals(Verdict.STOP_HARM, higher.lastDecision().verdict());
    }

    @Test
    void spendsInTheLowerTailOnlyWhenTheTestIsOneSidedAndLowerIsBetter() {
        Plan plan = fiveDays().better(Better.LOWER).sides(Sides.ONE).build();
        DecideHost lower = new DecideHost(plan).next(1000, 200, 1000, 200);
        assertNull(lower.lastLook().upper());
        assertNotNull(lower.lastLook().lower());
    }

    /** One-sided 0.025, power 0.9, looks at 1/2 and 1: drift 3.281799723843, first futility bound 0.2670250119633. */
    @Test
    void stopsForFutilityAtTheReferenceBound() {
        double drift = 3.281799723843;
        double halfInformation = 1000 / 2 / (0.2 * 0.8);
        Plan plan = days("fare-chip")
                .sides(Sides.ONE)
                .alpha(0.025)
                .power(0.9)
                .smallestEffect(drift / Math.sqrt(2 * halfInformation))
                .lookAt(0.5 - 1e-9, 1.0)
                .futility(Spending.of(Family.OBRIEN_FLEMING))
                .build();
        DecideHost futile = new DecideHost(plan).next(1000, 200, 1000, 200);
        Comparison look = futile.lastLook();
        assertEquals(0.5, look.informationFraction(), 1e-6);
        assertEquals(0.2670250119633, look.futility(), 1e-4, "futility bound, an independent reference computation");
        assertEquals(2.962588042728, look.upper(), 1e-4, "the benefit boundary ignores futility");
        assertEquals(Verdict.STOP_FUTILITY, look.verdict());
        assertEquals(List.of("stop wide"), futile.noticeKinds());
    }

    @Test
    void takesBenefitBoundariesWithFutilityAsWithout() {
        Plan plan = fiveDays()
                .smallestEffect(0.01)
                .futility(new Spending(Family.HWANG_SHIH_DECANI, -2))
                .build();
        DecideHost futile = new DecideHost(plan).next(1000, 200, 1000, 215);
        PlanDesign design = PlanDesign.of(plan, plan.challengers().get(0));
        Comparison look = futile.lastLook();
        double spent = SpendingFunctions.of(plan.test().benefit()).spent(0.025, look.informationFraction());
        assertEquals(2 * spent, look.alphaSpent(), 1e-15);
        assertNotNull(look.futility());
    }

    @Test
    void hasNoBenefitBoundaryBeforeTheMinimumRunIsOver() {
        Plan plan = fiveDays().atLeast(Duration.ofDays(3)).build();
        DecideHost early = new DecideHost(plan);
        for (int day = 1; day <= 2; day++) {
            early.next(900, 180, 900, 250);
            assertNull(early.lastLook().upper(), "day " + day);
            assertNotNull(early.lastLook().lower(), "day " + day);
            assertEquals(Verdict.CONTINUE, early.lastDecision().verdict());
        }
        early.next(900, 180, 900, 250);
        assertNotNull(early.lastLook().upper());
        assertEquals(Verdict.STOP_BENEFIT, early.lastDecision().verdict());
    }

    @Test
    void mayStopForHarmBeforeTheMinimumRunIsOver() {
        Plan plan = fiveDays().atLeast(Duration.ofDays(3)).build();
        DecideHost early = new DecideHost(plan).next(1000, 200, 1000, 140).next(1000, 200, 1000, 140);
        assertEquals(Verdict.STOP_HARM, early.lastDecision().verdict());
    }

    @Test
    void declaresNoBenefitBeforeTheMinimumRunIsOverEvenWithAllInformationIn() {
        for (Plan plan : List.of(
                fiveDays().atLeast(Duration.ofDays(3)).build(),
                fiveDays().atLeast(Duration.ofDays(3)).lookAt(0.5, 1.0).build())) {
            DecideHost early = new DecideHost(plan).next(6000, 1200, 6000, 1500);
            assertNull(early.lastLook().upper());
            assertEquals(0.025, early.lastLook().alphaSpent(), 1e-15, "the harm tail has spent all it may");
            assertEquals(Verdict.CONTINUE, early.lastDecision().verdict());
            early.next(500, 100, 500, 125);
            assertEquals(Verdict.CONTINUE, early.lastDecision().verdict());
            early.next(500, 100, 500, 125);
            assertEquals(Verdict.STOP_BENEFIT, early.lastDecision().verdict());
            assertEquals(0.05, early.lastLook().alphaSpent(), 1e-15);
            assertNull(early.lastLook().lower(), "the harm tail has nothing left to spend");
        }
    }

    @Test
    void latchesTheVerdictWhateverComesLater() {
        host.next(1000, 200, 1000, 260).next(1000, 200, 1000, 260);
        int records = host.decisions().size();
        host.next(1000, 400, 1000, 10).next(1000, 400, 1000, 10).next(1000, 400, 1000, 10);
        assertEquals(Verdict.STOP_BENEFIT, host.view().verdict());
        assertEquals(records, host.decisions().size(), "nothing is left to decide");
        assertEquals(List.of("stop wide"), host.noticeKinds());
        assertEquals(
                new DecisionRecord.VariantCount(0, "wide", 5000, 550),
                host.view().counts().get(1),
                "later data are shown");
    }

    @Test
    void looksAtTheEndOfEveryIntervalOnly() {
        Plan plan = fiveDays()
                .counting(Duration.ofMinutes(30), Duration.ofMinutes(10), Duration.ofHours(6))
                .build();
        DecideHost quarters = new DecideHost(plan);
        for (int window = 1; window <= 8; window++) {
            quarters.next(250, 50, 250, 50);
            assertEquals(window / 4, quarters.decisions().size(), "after window " + window);
        }
    }

    @Test
    void delaysALookWhileAnArmHasTooFewOfEitherKind() {
        host.next(40, 10, 40, 4);
        assertEquals(List.of(), host.decisions());
        assertEquals(Verdict.WAITING, host.view().verdict());
        assertEquals(1, host.view().looksDelayed());
        assertEquals(
                "wide has 4 successes and 36 failures (a look needs 5 of each)",
                host.view().delayReason());
        host.next(40, 10, 40, 4);
        assertEquals(1, host.decisions().size(), "taken with the first window that allows it");
        assertEquals(1, host.view().looksDelayed());
    }

    @Test
    void delaysALookWhileInformationDoesNotGrow() {
        host.next(1000, 200, 1000, 200).quiet(1);
        assertEquals(1, host.decisions().size());
        assertEquals(
                "the information fraction has grown from 0.2000 to 0.2000 only (a look needs 0.001 more)",
                host.view().delayReason());
        host.next(1000, 200, 1000, 200);
        assertEquals(2, host.decisions().size());
    }

    @Test
    void countsADelayedLookOnceAlsoAcrossARestart() {
        host.next(40, 10, 40, 4);
        host.restart(0).next(10, 2, 10, 0);
        assertEquals(1, host.view().looksDelayed());
    }

    @Test
    void takesADelayedLookWithTheNextWindowAndThenReturnsToTheGrid() {
        Plan plan = fiveDays()
                .counting(Duration.ofMinutes(30), Duration.ofMinutes(10), Duration.ofHours(6))
                .build();
        DecideHost quarters = new DecideHost(plan).quiet(4);
        assertEquals(1, quarters.view().looksDelayed());
        quarters.next(250, 50, 250, 50);
        assertEquals(1, quarters.decisions().size(), "a due look stays due");
        quarters.next(250, 50, 250, 50).next(250, 50, 250, 50);
        assertEquals(1, quarters.decisions().size());
        quarters.next(250, 50, 250, 50);
        assertEquals(2, quarters.decisions().size(), "the end of the second day is on the grid");
    }

    @Test
    void looksOnceWhenInformationSkipsSeveralFractions() {
        Plan plan = fiveDays().lookAt(0.25, 0.5, 0.75, 1.0).build();
        DecideHost jumps = new DecideHost(plan).next(1000, 200, 1000, 200);
        assertEquals(0, jumps.decisions().size());
        jumps.next(2000, 400, 2000, 400);
        assertEquals(1, jumps.decisions().size(), "at 0.6, for 0.25 and 0.5 together");
        jumps.next(500, 100, 500, 100);
        assertEquals(1, jumps.decisions().size(), "0.7 is not 0.75 yet");
        jumps.next(500, 100, 500, 100);
        assertEquals(2, jumps.decisions().size());
    }

    @Test
    void spendsWhatIsLeftAtTheEndOfARunWhoseDataHaveCeasedToGrow() {
        host.next(1000, 200, 1000, 245).quiet(4);
        assertEquals(Verdict.CONTINUE, host.decisions().get(0).verdict(), "z 2.42 is far from the first boundary");
        Comparison last = host.lastLook();
        assertEquals(2, last.look());
        assertEquals(0.05, last.alphaSpent(), 1e-15);
        assertEquals(1.959964, last.upper(), 1e-6, "a single test: the first look stands for both");
        assertEquals(Verdict.STOP_BENEFIT, last.verdict());
        assertEquals(List.of("stop wide"), host.noticeKinds());
    }

    @Test
    void writesAnEndRecordWhenNoLastLookIsPossible() {
        host.quiet(4).next(3, 1, 3, 1);
        DecisionRecord end = host.lastDecision();
        assertEquals(Occasion.END, end.occasion());
        assertEquals(List.of(), end.comparisons());
        assertEquals(Verdict.EXHAUSTED, end.verdict());
        assertEquals(FIVE_DAYS.run().end(), end.windowEnd());
        assertTrue(
                host.noticeKinds().contains("exhausted wide"),
                host.noticeKinds().toString());
    }

    @Test
    void saysNothingAfterTheRunWhenTheVerdictWasSettledBefore() {
        host.next(6000, 1200, 6000, 1200);
        int records = host.decisions().size();
        host.next(100, 20, 100, 20)
                .next(100, 20, 100, 20)
                .next(100, 20, 100, 20)
                .next(100, 20, 100, 20);
        assertEquals(records, host.decisions().size());
        assertEquals(Trust.SOUND, host.view().trust());
    }

    private static Plans deckMap() {
        return days("deck-map")
                .variants(
                        new Variant("plain", 0.4, true),
                        new Variant("coast", 0.3, false),
                        new Variant("islands", 0.3, false))
                .smallestEffect(0.02);
    }

    @Test
    void splitsAlphaEvenlyOverTheChallengers() {
        Plan plan = deckMap().build();
        DecideHost three = new DecideHost(plan).next(4000, 800, 3000, 600, 3000, 600);
        assertEquals(
                List.of("coast", "islands"),
                three.lastDecision().comparisons().stream()
                        .map(Comparison::variant)
                        .toList());
        for (Variant challenger : plan.challengers()) {
            assertEquals(0.0125, PlanDesign.of(plan, challenger).benefitLevel(), 1e-15);
        }
        three.next(4000, 800, 3000, 600, 3000, 600).next(40000, 8000, 30000, 6000, 30000, 6000);
        for (Comparison look : three.lastDecision().comparisons()) {
            assertEquals(0.025, look.alphaSpent(), 1e-15, look.variant());
        }
    }

    @Test
    void goesOnWithTheOtherChallengerWhenOneIsSettled() {
        DecideHost three = new DecideHost(deckMap().build())
                .next(4000, 800, 3000, 600, 3000, 840)
                .next(400, 80, 300, 60, 300, 84);
        assertEquals(
                Map.of("coast", Verdict.CONTINUE, "islands", Verdict.STOP_BENEFIT),
                three.view().verdicts());
        assertEquals(Verdict.STOP_BENEFIT, three.view().verdict());
        assertEquals(List.of("stop islands"), three.noticeKinds());
        assertEquals(
                List.of("coast"),
                three.lastDecision().comparisons().stream()
                        .map(Comparison::variant)
                        .toList());
    }

    @Test
    void settlesAtTheEndAChallengerThatCannotLookBesideOneThatCan() {
        DecideHost three = new DecideHost(deckMap().build()).quiet(4).next(400, 80, 300, 60, 300, 2);
        assertEquals(
                Map.of("coast", Verdict.EXHAUSTED, "islands", Verdict.EXHAUSTED),
                three.view().verdicts());
        assertEquals(Verdict.EXHAUSTED, three.lastDecision().verdict());
        assertTrue(
                three.noticeKinds().containsAll(List.of("exhausted coast", "exhausted islands")),
                three.noticeKinds().toString());
    }

    @Test
    void recordsHowManyWindowsWereSealedOnlyBecauseAPartitionWasIdle() {
        WindowTally first = DecideHost.window(FIVE_DAYS, 0, 600, 120, 600, 120);
        WindowTally second = DecideHost.window(FIVE_DAYS, 1, 600, 120, 600, 120);
        host.take(idle(0, first)).take(idle(1, first)).take(DecideHost.update(FIVE_DAYS, 2, 3, 1, first));
        assertEquals(1, host.lastDecision().idleSealed(), "two idle partitions, one window");
        host.take(DecideHost.update(FIVE_DAYS, 0, 3, 2, second))
                .take(DecideHost.update(FIVE_DAYS, 1, 3, 2, second))
                .take(DecideHost.update(FIVE_DAYS, 2, 3, 2, second));
        assertEquals(2, host.lastDecision().comparisons().get(0).look());
        assertEquals(1, host.lastDecision().idleSealed());
    }

    @Test
    void recordsIdleWindowsInWhichThePartitionHadNothingToSeal() {
        WindowTally third = DecideHost.window(FIVE_DAYS, 2, 600, 120, 600, 120);
        host.take(idle(0, 1)).take(idle(0, 2)).take(idle(1, 1));
        host.take(DecideHost.update(FIVE_DAYS, 0, 3, 3))
                .take(DecideHost.update(FIVE_DAYS, 1, 3, 3))
                .restart(0)
                .take(DecideHost.update(FIVE_DAYS, 2, 3, 3, third));
        assertEquals(2, host.lastDecision().idleSealed());
    }

    @Test
    void keepsEveryStateRecordSmallWhileAPartitionLags() {
        Plan minutes = fiveDays()
                .counting(Duration.ofMinutes(30), Duration.ofMinutes(10), Duration.ofMinutes(1))
                .build();
        DecideHost lagging = new DecideHost(minutes);
        int windows = 7_000;
        WindowTally[] sealed = new WindowTally[windows];
        for (int window = 0; window < windows; window++) {
            sealed[window] = DecideHost.window(minutes, window, 6, 1, 6, 1);
        }
        for (int partition = 0; partition < 12; partition++) {
            lagging.take(DecideHost.update(minutes, partition, 13, windows, sealed));
        }
        int largest = lagging.log().changes().stream()
                .mapToInt(change -> change.value().length)
                .max()
                .orElseThrow();
        assertTrue(largest < 10_000, largest + " bytes in one record");
        lagging.restart(lagging.log().size()).take(DecideHost.update(minutes, 12, 13, windows));
        assertEquals(
                12 * 6 * windows,
                lagging.view().counts().stream()
                        .filter(count -> count.variant().equals("plain"))
                        .mapToLong(VariantCount::trials)
                        .sum());
        assertEquals(
                List.of(),
                lagging.log().live().stream()
                        .filter(change -> change.key()[0] == 'p')
                        .toList(),
                "what is complete leaves nothing behind");
    }

    private static TallyUpdate idle(int partition, WindowTally window) {
        return idle(DecideHost.update(FIVE_DAYS, partition, 3, 1, window));
    }

    private static TallyUpdate idle(int partition, int untilWindow) {
        return idle(DecideHost.update(FIVE_DAYS, partition, 3, untilWindow));
    }

    private static TallyUpdate idle(TallyUpdate sealed) {
        return new TallyUpdate(
                sealed.experiment(),
                sealed.planDigest(),
                sealed.partition(),
                sealed.partitions(),
                sealed.sealedUntilMillis(),
                SealCause.IDLE,
                sealed.windows());
    }

    @Test
    void setsUpdatesWithoutAPlanAside() {
        DecideShard shard = new DecideShard(List.of());
        shard.apply(DecideHost.update(FIVE_DAYS, 0, 1, 1));
        assertEquals(Map.of("quay-banner", 1L), shard.unplanned());
        assertEquals(Map.of(), shard.views());
    }

    @Test
    void refusesCountsMadeUnderAnotherPlan() {
        Plan changed = fiveDays().alpha(0.01).build();
        DecideShard shard = new DecideShard(List.of(changed));
        PlanChangedException refused =
                assertThrows(PlanChangedException.class, () -> shard.apply(DecideHost.update(FIVE_DAYS, 0, 1, 1)));
        assertEquals(changedMessage(FIVE_DAYS, changed), refused.getMessage());
    }

    @Test
    void refusesDecisionsTakenUnderAnotherPlan() {
        Plan changed = fiveDays().alpha(0.01).build();
        host.next(1000, 200, 1000, 200);
        DecideShard shard = new DecideShard(List.of(changed));
        PlanChangedException refused =
                assertThrows(PlanChangedException.class, () -> host.log().replay(shard::restore));
        assertEquals(changedMessage(FIVE_DAYS, changed), refused.getMessage());
        assertEquals("quay-banner", refused.experiment());
    }

    private static String changedMessage(Plan before, Plan after) {
        return "plan of quay-banner: it has changed since its first event was counted (digest "
                + PlanDigest.of(before).substring(0, 12)
                + " then, " + PlanDigest.of(after).substring(0, 12)
                + " now); put the earlier plan file back, or give the changed plan a new experiment name";
    }
}
