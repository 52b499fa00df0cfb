package io.tallyward.engine.count;

import static io.tallyward.engine.Events.at;
import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.engine.Events;
import io.tallyward.engine.Plans;
import io.tallyward.engine.event.Event;
import io.tallyward.engine.event.EventKind;
import io.tallyward.engine.event.RejectReason;
import io.tallyward.engine.plan.Plan;
import java.time.Duration;
import java.util.List;
import java.util.Optional;
import java.util.OptionalLong;
import org.junit.jupiter.api.Test;

/** When windows are sealed, by what, and what is told about it. [0, 5) is sealed at minute 45. */
class CountShardSealingTest {

    private static final String BANNER = "quay-banner";
    private static final Plan QUAY_BANNER = Plans.plan(BANNER).build();
    private static final double MILLISECOND = 1 / 60_000.0;

    private final CountHost host = CountHost.of(QUAY_BANNER);
    private final CountHost two = new CountHost(0, 1, List.of(QUAY_BANNER), 2);

    private static Event view(String unit, double minute) {
        return Events.view(BANNER, "wide", unit, unit + "@" + minute, minute);
    }

    private static Event click(String unit, double minute) {
        return Events.click(BANNER, "wide", unit, unit + "!" + minute, minute);
    }

    private static TallyUpdate only(CountHost host) {
        assertEquals(1, host.tallies().size(), () -> "tallies told: " + host.tallies());
        return host.tallies().get(0);
    }

    @Test
    void sealsAWindowWhenTheWatermarkReachesItsEndAndAttributionAndGrace() {
        host.feed(view("ada", 1), view("ben", 45 - MILLISECOND)).commit();
        assertEquals(List.of(), host.tallies());
        host.feed(view("cleo", 45)).commit();
        TallyUpdate update = only(host);
        assertEquals(at(5), update.sealedUntilMillis());
        assertEquals(SealCause.WATERMARK, update.cause());
        assertEquals(
                List.of(new WindowTally(
                        at(0),
                        List.of(WindowTally.Cell.ofUnits(0, 1, 1, 0)),
                        new OutcomeCounts.Builder().add(Outcome.TRIAL, 1).build())),
                update.windows());
    }

    @Test
    void coversQuietWindowsWithoutListingThem() {
        host.feed(view("ada", 1), view("ben", 601)).commit();
        TallyUpdate update = only(host);
        assertEquals(1, update.windows().size());
        assertEquals(at(560), update.sealedUntilMillis());
    }

    @Test
    void doesNotListAWindowItsOnlyTrialHasMovedOutOf() {
        host.feed(view("ada", 9), view("ada", 2)).end();
        assertEquals(
                1,
                only(host).windows().size(),
                () -> "windows told: " + only(host).windows());
    }

    @Test
    void tellsAnOutcomeThatIsFinalAtOnceWithItsWindowOrTheNextOpenOne() {
        host.feed(view("clock", 46), view("ada", 4), view("clock", 51)).commit();
        WindowTally told = host.tallies().get(0).windows().get(0);
        assertEquals(at(5), told.startMillis());
        assertEquals(1, told.outcomes().get(Outcome.LATE));
    }

    @Test
    void keepsTheWatermarkWhereABadClockWouldMoveIt() {
        host.feed(view("ada", 1));
        Event ahead = view("ben", 300);
        assertEquals(Optional.of(RejectReason.BAD_TIME), host.shard().apply(0, at(2), ahead));
        assertEquals(OptionalLong.of(at(1)), host.shard().view().watermarkMillis());
        host.commit();
        assertEquals(List.of(), host.tallies());
    }

    @Test
    void keepsTheWatermarkWhereAnOutsideEventWouldMoveIt() {
        host.feed(view("ada", 1), view("ben", 5 * 24 * 60 + 500));
        assertEquals(OptionalLong.of(at(1)), host.shard().view().watermarkMillis());
        assertEquals(1, host.outcomes(BANNER).get(Outcome.OUTSIDE));
    }

    @Test
    void hasNoWatermarkBeforeTheFirstAdmittedEvent() {
        assertEquals(OptionalLong.empty(), host.shard().view().watermarkMillis());
        host.shard().apply(0, at(0), Events.event(EventKind.VIEW, "unheard-of", "wide", "ada", "1", at(0)));
        assertEquals(OptionalLong.empty(), host.shard().view().watermarkMillis());
    }

    @Test
    void sharesTheWatermarkAmongExperimentsWithTheirOwnDelays() {
        Plan quick = Plans.plan("fare-chip")
                .counting(Duration.ofMinutes(5), Duration.ofMinutes(1), Duration.ofMinutes(1))
                .build();
        CountHost both = CountHost.of(QUAY_BANNER, quick);
        both.feed(view("ada", 1), Events.view("fare-chip", "plain", "ada", "f", 1))
                .feed(view("ben", 8));
        both.commit();
        assertEquals("fare-chip", only(both).experiment());
        assertEquals(at(2), only(both).sealedUntilMillis());
    }

    @Test
    void lettingTimePassSealsNothingBeforeTheIdleTimeIsOver() {
        host.feed(view("ada", 1));
        host.shard().passTime(0, at(60), true);
        host.shard().passTime(0, at(65) - 1, true);
        host.commit();
        assertEquals(List.of(), host.tallies());
    }

    @Test
    void anIdleSourceIsSealedByTheClockLessTheIdleTime() {
        host.feed(view("ada", 1));
        host.shard().passTime(0, at(60), true);
        host.shard().passTime(0, at(65), true);
        assertEquals(OptionalLong.of(at(60)), host.shard().view().watermarkMillis());
        host.commit();
        TallyUpdate update = only(host);
        assertEquals(SealCause.IDLE, update.cause());
        assertEquals(at(20), update.sealedUntilMillis());
    }

    @Test
    void aSourceWithUnreadRecordsIsNeverIdle() {
        host.feed(view("ada", 1));
        for (int minute = 60; minute < 600; minute += 10) {
            host.shard().passTime(0, at(minute), false);
        }
        host.shard().passTime(0, at(600), true);
        host.shard().passTime(0, at(601), false);
        host.shard().passTime(0, at(606) - 1, true);
        host.commit();
        assertEquals(List.of(), host.tallies());
        assertEquals(OptionalLong.of(at(1)), host.shard().view().watermarkMillis());
    }

    @Test
    void anEventThatAdvancesEndsIdleness() {
        host.feed(view("ada", 1));
        host.shard().passTime(0, at(60), true);
        host.feed(view("ben", 2));
        host.shard().passTime(0, at(65), true);
        host.shard().passTime(0, at(69), true);
        assertEquals(OptionalLong.of(at(2)), host.shard().view().watermarkMillis());
        host.shard().passTime(0, at(70), true);
        assertEquals(OptionalLong.of(at(65)), host.shard().view().watermarkMillis());
    }

    @Test
    void theStandInNeverMovesTheWatermarkBack() {
        host.feed(view("ada", 100));
        host.shard().passTime(0, at(60), true);
        host.shard().passTime(0, at(70), true);
        assertEquals(OptionalLong.of(at(100)), host.shard().view().watermarkMillis());
    }

    @Test
    void anEventBehindTheStandInIsLateOnceItsWindowIsSealed() {
        host.shard().passTime(0, at(55), true);
        host.shard().passTime(0, at(65), true);
        host.feed(view("ada", 14), view("ben", 20)).end();
        assertEquals(1, host.outcomes(BANNER).get(Outcome.LATE));
        assertEquals(1, host.outcomes(BANNER).get(Outcome.TRIAL));
    }

    @Test
    void separatesUpdatesByTheCauseOfSealing() {
        host.feed(view("ada", 1), view("ben", 50));
        host.shard().passTime(0, at(60), true);
        host.shard().passTime(0, at(120), true);
        host.end();
        assertEquals(
                List.of(SealCause.WATERMARK, SealCause.IDLE, SealCause.END),
                host.tallies().stream().map(TallyUpdate::cause).toList());
        assertEquals(
                List.of(at(10), at(75), at(5 * 24 * 60)),
                host.tallies().stream().map(TallyUpdate::sealedUntilMillis).toList());
    }

    @Test
    void theSlowestSourceHoldsSealingBack() {
        two.feedFrom(0, view("ada", 1)).feedFrom(0, view("ben", 200)).commit();
        assertEquals(List.of(), two.tallies());
        two.feedFrom(1, view("cleo", 45)).commit();
        assertEquals(at(5), only(two).sealedUntilMillis());
        assertEquals(SealCause.WATERMARK, only(two).cause());
    }

    @Test
    void anIdleSourceStopsHoldingTheOtherBack() {
        two.feedFrom(0, view("ada", 1)).feedFrom(0, view("ben", 200));
        two.shard().passTime(1, at(200), true);
        two.shard().passTime(1, at(205), true);
        two.commit();
        assertEquals(SealCause.IDLE, only(two).cause());
        assertEquals(at(160), only(two).sealedUntilMillis());
        two.feedFrom(1, view("cleo", 203))
                .feedFrom(0, view("dan", 210))
                .feedFrom(1, view("eve", 206))
                .commit();
        assertEquals(SealCause.WATERMARK, two.tallies().get(1).cause(), "source 1 is back");
    }

    @Test
    void judgesLatenessByTheClockOfTheEventsOwnSource() {
        two.feedFrom(0, view("ada", 1)).feedFrom(0, view("clock", 45)).feedFrom(0, view("ben", 2));
        two.feedFrom(1, view("cleo", 3)).feedFrom(1, click("ada", 4)).feedFrom(0, click("cleo", 5));
        two.end();
        assertEquals(new Counted.Count(3, 1), two.counted(BANNER).total(1), "ada, clock, cleo; ada's click");
        assertEquals(2, two.outcomes(BANNER).get(Outcome.LATE), "ben's view and cleo's click");
    }

    @Test
    void aLateExposureNeverMovesATrialNotEvenInATie() {
        two.feedFrom(1, Events.view(BANNER, "wide", "ada", "z", 2))
                .feedFrom(0, view("clock", 45))
                .feedFrom(0, Events.view(BANNER, "plain", "ada", "a", 2))
                .end();
        assertEquals(new Counted.Count(0, 0), two.counted(BANNER).total(0));
        assertEquals(1, two.outcomes(BANNER).get(Outcome.CROSSOVER));
    }

    @Test
    void aLateClickAtTheVeryMomentOfAnOpenTrialIsLateAndNoOrphan() {
        two.feedFrom(1, view("ada", 2)).feedFrom(0, view("clock", 45)).feedFrom(0, click("ada", 2));
        two.end();
        assertEquals(1, two.outcomes(BANNER).get(Outcome.LATE));
        assertEquals(0, two.outcomes(BANNER).get(Outcome.ORPHAN));
    }

    @Test
    void aLateClickOfASuccessIsARepeatWhicheverClickArrivedFirst() {
        two.feedFrom(1, view("ada", 2))
                .feedFrom(0, view("clock", 45))
                .feedFrom(0, click("ada", 3))
                .feedFrom(1, click("ada", 4))
                .end();
        assertEquals(1, two.outcomes(BANNER).get(Outcome.SUCCESS));
        assertEquals(1, two.outcomes(BANNER).get(Outcome.REPEAT));
        assertEquals(0, two.outcomes(BANNER).get(Outcome.LATE));
    }

    @Test
    void theEndOfInputSealsTheWholeRun() {
        host.feed(view("ada", 1), click("ada", 2)).end();
        TallyUpdate update = only(host);
        assertEquals(SealCause.END, update.cause());
        assertEquals(QUAY_BANNER.run().end().toEpochMilli(), update.sealedUntilMillis());
        assertEquals(0, host.openEvents(BANNER));
    }

    @Test
    void aLongStretchIsToldInSeveralUpdatesThatFollowOneAnother() {
        int windows = 900;
        for (int window = 0; window < windows; window++) {
            host.feed(view("unit-" + window, 5 * window));
        }
        host.end();
        List<TallyUpdate> updates = host.tallies();
        assertTrue(updates.size() > 2, () -> "updates: " + updates.size());
        long next = at(0);
        int told = 0;
        for (TallyUpdate update : updates) {
            for (WindowTally window : update.windows()) {
                assertEquals(next, window.startMillis());
                next += Duration.ofMinutes(5).toMillis();
                told++;
            }
            assertTrue(update.sealedUntilMillis() >= next, () -> "an update reaches " + update.sealedUntilMillis());
        }
        assertEquals(windows, told);
    }
}
