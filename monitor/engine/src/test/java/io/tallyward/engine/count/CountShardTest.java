package io.tallyward.engine.count;

import static io.tallyward.engine.Events.at;
import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertThrows;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.engine.Events;
import io.tallyward.engine.Plans;
import io.tallyward.engine.count.Counted.Count;
import io.tallyward.engine.count.Counted.Place;
import io.tallyward.engine.event.Event;
import io.tallyward.engine.event.EventKind;
import io.tallyward.engine.event.RejectReason;
import io.tallyward.engine.plan.AllocationEpoch;
import io.tallyward.engine.plan.Plan;
import java.time.Duration;
import java.util.List;
import java.util.Map;
import java.util.Optional;
import org.junit.jupiter.api.Test;

/**
 * Each counting rule by a small example. Windows of 5 minutes, attribution 30, grace 10: [0, 5) is sealed at minute 45. A
 * second experiment, fare-chip, moves the watermark without touching the counts under test.
 */
class CountShardTest {

    private static final String BANNER = "quay-banner";
    private static final int PLAIN = 0;
    private static final int WIDE = 1;
    private static final double MILLISECOND = 1 / 60_000.0;

    private static final Plan QUAY_BANNER = Plans.plan(BANNER).build();
    private static final Plan FARE_CHIP = Plans.plan("fare-chip").build();

    private final CountHost host = CountHost.of(QUAY_BANNER, FARE_CHIP);
    private int nextId;

    private Event view(String variant, String unit, double minute) {
        return Events.view(BANNER, variant, unit, "view-" + nextId++, minute);
    }

    private Event click(String variant, String unit, double minute) {
        return Events.click(BANNER, variant, unit, "click-" + nextId++, minute);
    }

    /** Moves the watermark, and nothing else of quay-banner. */
    private void passTo(double minute) {
        host.feed(Events.view("fare-chip", "plain", "clock", "tick-" + nextId++, minute));
    }

    /** The same, with some of the orphans naming a variant. */
    private static OutcomeCounts orphansOf(int variant, long events, OutcomeCounts outcomes) {
        return new OutcomeCounts.Builder()
                .add(outcomes)
                .addOrphans(variant, events)
                .build();
    }

    private static OutcomeCounts outcomes(Object... pairs) {
        OutcomeCounts.Builder builder = new OutcomeCounts.Builder();
        for (int i = 0; i < pairs.length; i += 2) {
            builder.add((Outcome) pairs[i], (Integer) pairs[i + 1]);
        }
        return builder.build();
    }

    private void assertCells(Map<Place, Count> expected) {
        assertEquals(new Counted(expected), host.counted(BANNER));
    }

    private static Map<Place, Count> one(long minute, int variant, long trials, long successes) {
        return Map.of(new Place(minute, 0, variant), new Count(trials, successes));
    }

    @Test
    void countsAUnitOnceHoweverOftenItSeesAndClicks() {
        host.feed(view("wide", "ada", 1), view("wide", "ada", 2), view("wide", "ada", 9))
                .feed(click("wide", "ada", 3), click("wide", "ada", 12))
                .end();
        assertCells(one(0, WIDE, 1, 1));
        assertEquals(outcomes(Outcome.TRIAL, 1, Outcome.SUCCESS, 1, Outcome.REPEAT, 3), host.outcomes(BANNER));
    }

    @Test
    void countsADuplicateAsARepeat() {
        Event seen = view("wide", "ada", 1);
        Event clicked = click("wide", "ada", 2);
        host.feed(seen, seen, clicked, clicked).end();
        assertCells(one(0, WIDE, 1, 1));
        assertEquals(outcomes(Outcome.TRIAL, 1, Outcome.SUCCESS, 1, Outcome.REPEAT, 2), host.outcomes(BANNER));
    }

    @Test
    void closesAttributionAtBothEnds() {
        host.feed(view("wide", "at-start", 1), click("wide", "at-start", 1))
                .feed(view("wide", "at-end", 1), click("wide", "at-end", 31))
                .feed(view("wide", "after", 1), click("wide", "after", 31 + MILLISECOND))
                .feed(view("wide", "before", 1), click("wide", "before", 1 - MILLISECOND))
                .end();
        assertCells(one(0, WIDE, 4, 2));
        assertEquals(
                orphansOf(
                        WIDE, 1, outcomes(Outcome.TRIAL, 4, Outcome.SUCCESS, 2, Outcome.EXPIRED, 1, Outcome.ORPHAN, 1)),
                host.outcomes(BANNER));
    }

    @Test
    void opensAWindowAtItsStartAndClosesItBeforeItsEnd() {
        host.feed(view("wide", "start", 5), view("wide", "end", 10 - MILLISECOND), view("wide", "next", 10))
                .end();
        assertCells(Map.of(new Place(5, 0, WIDE), new Count(2, 0), new Place(10, 0, WIDE), new Count(1, 0)));
    }

    @Test
    void letsTheEarliestExposureStandWhateverArrivesFirst() {
        host.feed(view("wide", "ada", 9), view("wide", "ada", 2)).end();
        assertCells(one(0, WIDE, 1, 0));
        assertEquals(outcomes(Outcome.TRIAL, 1, Outcome.REPEAT, 1), host.outcomes(BANNER));
    }

    @Test
    void movesTheTrialToTheVariantOfAnEarlierExposureWithItsClicks() {
        host.feed(view("wide", "ada", 9), click("wide", "ada", 10), click("plain", "ada", 11))
                .feed(view("plain", "ada", 2))
                .end();
        assertCells(one(0, PLAIN, 1, 1));
        assertEquals(outcomes(Outcome.TRIAL, 1, Outcome.SUCCESS, 1, Outcome.CROSSOVER, 2), host.outcomes(BANNER));
    }

    @Test
    void losesASuccessWhenAnEarlierExposurePutsTheClickOutOfTime() {
        host.feed(view("wide", "ada", 20), click("wide", "ada", 40)).feed(view("wide", "ada", 2));
        assertEquals(3, host.openEvents(BANNER));
        host.end();
        assertCells(one(0, WIDE, 1, 0));
        assertEquals(outcomes(Outcome.TRIAL, 1, Outcome.REPEAT, 1, Outcome.EXPIRED, 1), host.outcomes(BANNER));
    }

    @Test
    void breaksATieBetweenExposuresByTheChecksumOfTheEventId() {
        // CRC-32: 71beeff9 of b, e8b7be43 of a (any implementation of ITU-T V.42 tells)
        for (String[] order : new String[][] {{"a", "b"}, {"b", "a"}}) {
            CountHost tied = CountHost.of(QUAY_BANNER);
            for (String id : order) {
                tied.feed(Events.view(BANNER, id.equals("b") ? "wide" : "plain", "ada", id, 1));
            }
            tied.end();
            assertEquals(new Counted(one(0, WIDE, 1, 0)), tied.counted(BANNER), String.join(" then ", order));
            assertEquals(outcomes(Outcome.TRIAL, 1, Outcome.CROSSOVER, 1), tied.outcomes(BANNER));
        }
    }

    @Test
    void breaksATieOfTheSameIdByThePlansOrderOfVariants() {
        for (String[] order : new String[][] {{"plain", "wide"}, {"wide", "plain"}}) {
            CountHost tied = CountHost.of(QUAY_BANNER);
            for (String variant : order) {
                tied.feed(Events.view(BANNER, variant, "ada", "same", 1));
            }
            tied.end();
            assertEquals(new Counted(one(0, PLAIN, 1, 0)), tied.counted(BANNER), String.join(" then ", order));
        }
    }

    @Test
    void attributesAClickThatArrivesBeforeItsView() {
        host.feed(click("wide", "ada", 3)).feed(view("wide", "ada", 1)).end();
        assertCells(one(0, WIDE, 1, 1));
        assertEquals(outcomes(Outcome.TRIAL, 1, Outcome.SUCCESS, 1), host.outcomes(BANNER));
    }

    @Test
    void callsEventsUnderAnotherVariantCrossoversOnceThereIsATrial() {
        host.feed(view("plain", "ada", 5), view("wide", "ada", 5), view("wide", "ada", 6))
                .feed(click("wide", "ada", 7), click("wide", "ada", 300))
                .end();
        assertEquals(outcomes(Outcome.TRIAL, 1, Outcome.CROSSOVER, 4), host.outcomes(BANNER));
        assertCells(one(5, PLAIN, 1, 0));
    }

    @Test
    void callsAClickBeforeTheTrialAnOrphanWhateverItsVariant() {
        host.feed(view("plain", "ada", 9))
                .feed(click("plain", "ada", 8), click("wide", "ada", 7), click("wide", "ada", 1))
                .end();
        assertEquals(
                orphansOf(PLAIN, 1, orphansOf(WIDE, 2, outcomes(Outcome.TRIAL, 1, Outcome.ORPHAN, 3))),
                host.outcomes(BANNER));
    }

    @Test
    void callsAClickAnOrphanWhenItsWindowSealsWithoutAView() {
        host.feed(click("wide", "ada", 3));
        passTo(45 - MILLISECOND);
        assertEquals(1, host.openEvents(BANNER));
        passTo(45);
        assertEquals(0, host.openEvents(BANNER));
        assertEquals(orphansOf(WIDE, 1, outcomes(Outcome.ORPHAN, 1)), host.outcomes(BANNER));
        host.feed(view("wide", "ada", 6)).end();
        assertCells(one(5, WIDE, 1, 0));
        assertEquals(orphansOf(WIDE, 1, outcomes(Outcome.ORPHAN, 1, Outcome.TRIAL, 1)), host.outcomes(BANNER));
    }

    @Test
    void callsAClickWithoutTrialAnOrphanAtOnceWhenItsWindowIsSealed() {
        passTo(45);
        host.feed(click("wide", "ada", 3));
        assertEquals(orphansOf(WIDE, 1, outcomes(Outcome.ORPHAN, 1)), host.outcomes(BANNER));
        assertEquals(0, host.openEvents(BANNER));
    }

    @Test
    void countsTheFirstEventWhoseWindowIsNotYetSealed() {
        passTo(45 - MILLISECOND);
        host.feed(view("wide", "in-time", 4));
        passTo(45);
        host.feed(view("wide", "too-late", 4), view("wide", "next-window", 5)).end();
        assertCells(Map.of(new Place(0, 0, WIDE), new Count(1, 0), new Place(5, 0, WIDE), new Count(1, 0)));
        assertEquals(outcomes(Outcome.TRIAL, 2, Outcome.LATE, 1), host.outcomes(BANNER));
    }

    @Test
    void keepsASealedTrialAgainstEarlierViews() {
        host.feed(view("wide", "ada", 6));
        passTo(50);
        host.feed(view("plain", "ada", 2), view("wide", "ada", 5)).end();
        assertCells(one(5, WIDE, 1, 0));
        assertEquals(outcomes(Outcome.TRIAL, 1, Outcome.LATE, 2), host.outcomes(BANNER));
    }

    @Test
    void keepsAnOpenTrialAgainstAnEarlierViewWhoseWindowIsSealed() {
        host.feed(view("wide", "ada", 6));
        passTo(45);
        host.feed(view("plain", "ada", 2), view("wide", "ada", 5)).end();
        assertCells(one(5, WIDE, 1, 0));
        assertEquals(outcomes(Outcome.TRIAL, 1, Outcome.LATE, 1, Outcome.REPEAT, 1), host.outcomes(BANNER));
    }

    @Test
    void callsFurtherEventsOfASealedTrialWhatTheyWouldHaveBeenBefore() {
        host.feed(view("wide", "ada", 6), click("wide", "ada", 7));
        passTo(50);
        host.feed(view("wide", "ada", 6), view("wide", "ada", 49), view("plain", "ada", 8))
                .feed(click("wide", "ada", 36), click("wide", "ada", 36 + MILLISECOND), click("plain", "ada", 7))
                .feed(click("plain", "ada", 5), click("wide", "ada", 5))
                .end();
        assertCells(one(5, WIDE, 1, 1));
        OutcomeCounts expected = outcomes(
                Outcome.TRIAL,
                1,
                Outcome.SUCCESS,
                1,
                Outcome.REPEAT,
                3,
                Outcome.CROSSOVER,
                2,
                Outcome.EXPIRED,
                1,
                Outcome.ORPHAN,
                2);
        assertEquals(orphansOf(PLAIN, 1, orphansOf(WIDE, 1, expected)), host.outcomes(BANNER));
    }

    @Test
    void callsAClickLateWhenItWouldHaveMadeASealedTrialASuccess() {
        host.feed(view("wide", "ada", 6));
        passTo(50);
        host.feed(click("wide", "ada", 7), click("wide", "ada", 8)).end();
        assertCells(one(5, WIDE, 1, 0));
        assertEquals(outcomes(Outcome.TRIAL, 1, Outcome.LATE, 2), host.outcomes(BANNER));
    }

    @Test
    void countsTheRunFromItsStartAndUntilBeforeItsEnd() {
        double end = 5 * 24 * 60;
        Event early = Events.event(EventKind.VIEW, BANNER, "wide", "early", "e", at(0) - 1);
        host.feed(early, view("wide", "first", 0));
        passTo(end - 5);
        host.feed(view("wide", "last", end - MILLISECOND), view("wide", "over", end), click("wide", "over", end + 1))
                .end();
        assertEquals(2, host.counted(BANNER).total(WIDE).trials());
        assertEquals(outcomes(Outcome.TRIAL, 2, Outcome.OUTSIDE, 3), host.outcomes(BANNER));
    }

    @Test
    void putsATrialIntoTheEpochOfItsFirstExposure() {
        Plan ramped = Plans.plan(BANNER)
                .epochs(
                        new AllocationEpoch(Plans.FROM.plus(Duration.ofMinutes(7)), Map.of("plain", 0.2, "wide", 0.8)),
                        new AllocationEpoch(Plans.FROM.plus(Duration.ofMinutes(20)), Map.of("plain", 0.1, "wide", 0.9)))
                .build();
        CountHost ramp = CountHost.of(ramped);
        ramp.feed(view("wide", "before", 7 - MILLISECOND), click("wide", "before", 8))
                .feed(view("wide", "change", 7), view("plain", "change-too", 7))
                .feed(view("wide", "moved", 21), view("wide", "moved", 6))
                .feed(view("wide", "second", 20))
                .end();
        assertEquals(
                new Counted(Map.of(
                        new Place(5, 0, WIDE), new Count(2, 1),
                        new Place(5, 1, PLAIN), new Count(1, 0),
                        new Place(5, 1, WIDE), new Count(1, 0),
                        new Place(20, 2, WIDE), new Count(1, 0))),
                ramp.counted(BANNER));
    }

    @Test
    void keepsTheSameUnitOfTwoExperimentsApart() {
        host.feed(view("wide", "ada", 1), Events.view("fare-chip", "plain", "ada", "f", 1))
                .feed(click("wide", "ada", 2))
                .end();
        assertCells(one(0, WIDE, 1, 1));
        assertEquals(new Counted(one(0, PLAIN, 1, 0)), host.counted("fare-chip"));
    }

    @Test
    void rejectsWhatNoPlanNames() {
        CountShard shard = host.shard();
        Event unknownExperiment = Events.view("no-such-thing", "wide", "ada", "1", 1);
        Event unknownVariant = Events.view(BANNER, "tall", "ada", "2", 1);
        assertEquals(Optional.of(RejectReason.UNKNOWN_EXPERIMENT), shard.apply(0, at(1), unknownExperiment));
        assertEquals(Optional.of(RejectReason.UNKNOWN_VARIANT), shard.apply(0, at(1), unknownVariant));
        assertEquals(RejectReason.UNPARSABLE, shard.reject(RejectReason.UNPARSABLE));
        Map<RejectReason, Long> rejected = shard.view().rejected();
        assertEquals(
                Map.of(
                        RejectReason.UNKNOWN_EXPERIMENT, 1L,
                        RejectReason.UNKNOWN_VARIANT, 1L,
                        RejectReason.UNPARSABLE, 1L,
                        RejectReason.BAD_TIME, 0L,
                        RejectReason.MISSING_FIELD, 0L,
                        RejectReason.OVERSIZED, 0L),
                rejected);
        assertEquals(OutcomeCounts.NONE, host.outcomes(BANNER));
    }

    @Test
    void acceptsAClockThatIsAheadByTheAllowedSkewAndNoMore() {
        CountShard shard = host.shard();
        Event event = view("wide", "ada", 10);
        assertEquals(Optional.empty(), shard.apply(0, at(5), event));
        assertEquals(Optional.of(RejectReason.BAD_TIME), shard.apply(0, at(5) - 1, event));
    }

    @Test
    void countsThousandsOfUnitsInOneWindow() {
        int units = 20_000;
        for (int unit = 0; unit < units; unit++) {
            host.feed(view(unit % 2 == 0 ? "plain" : "wide", "unit-" + unit, 1));
        }
        host.commit().end();
        assertCells(Map.of(
                new Place(0, 0, PLAIN), new Count(units / 2, 0), new Place(0, 0, WIDE), new Count(units / 2, 0)));
        int limit = 512 * 1024;
        host.log().changes().stream()
                .filter(change -> change.value() != null)
                .forEach(change ->
                        assertTrue(change.value().length <= limit, "an entry has " + change.value().length + " bytes"));
    }

    @Test
    void needsASource() {
        assertThrows(
                IllegalArgumentException.class,
                () -> new CountShard(0, 1, List.of(QUAY_BANNER), CountHost.settings(), List.of()));
    }
}
