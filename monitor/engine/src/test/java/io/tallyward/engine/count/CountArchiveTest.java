package io.tallyward.engine.count;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.engine.Events;
import io.tallyward.engine.Plans;
import io.tallyward.engine.plan.Plan;
import java.nio.charset.StandardCharsets;
import java.time.Duration;
import java.util.List;
import org.junit.jupiter.api.Test;
import org.junit.jupiter.params.ParameterizedTest;
import org.junit.jupiter.params.provider.ValueSource;

/** An experiment whose run is over costs no memory and no log per unit. */
class CountArchiveTest {

    private static final String ENDED = "quay-banner";
    private static final String GOING_ON = "fare-chip";
    private static final int UNITS = 500;
    private static final double RUN = 360;
    private static final double SEALED = RUN + 40;
    private static final double ARCHIVED = SEALED + 24 * 60;

    private static CountHost host(boolean byView) {
        Plans ended = Plans.plan(ENDED).atMost(Duration.ofMinutes((long) RUN));
        Plan goesOn = Plans.plan(GOING_ON).build();
        CountHost host = CountHost.of(byView ? ended.byView().build() : ended.build(), goesOn);
        for (int i = 0; i < UNITS; i++) {
            double minute = RUN * i / UNITS;
            host.feed(Events.view(ENDED, "wide", "unit-" + i, "v" + i, minute))
                    .feed(Events.click(ENDED, "wide", "unit-" + i, "c" + i, minute + 0.1));
        }
        return host.commit();
    }

    private static CountHost until(CountHost host, double minute) {
        return host.feed(Events.view(GOING_ON, "plain", "clock", "clock" + minute, minute))
                .commit();
    }

    private static int units(CountHost host) {
        return host.shard().view().experiments().get(ENDED).units();
    }

    private static long entries(CountHost host) {
        return host.log().live().stream()
                .filter(change -> change.key()[0] == 's' || change.key()[0] == 'o')
                .filter(change -> new String(change.key(), StandardCharsets.ISO_8859_1).contains(ENDED))
                .count();
    }

    @ParameterizedTest
    @ValueSource(booleans = {false, true})
    void remembersEveryUnitUntilADayAfterTheRunIsSealed(boolean byView) {
        CountHost host = until(host(byView), ARCHIVED - 1);
        assertEquals(UNITS, units(host));
        assertTrue(entries(host) > 0);
        host.feed(Events.view(ENDED, "plain", "unit-7", "late", 10));
        assertEquals(1, host.outcomes(ENDED).get(Outcome.CROSSOVER));
    }

    @ParameterizedTest
    @ValueSource(booleans = {false, true})
    void forgetsEveryUnitThenAndKeepsItsCounts(boolean byView) {
        CountHost host = until(host(byView), ARCHIVED);
        assertEquals(0, units(host));
        assertEquals(0, entries(host));
        assertEquals(UNITS, host.outcomes(ENDED).get(Outcome.TRIAL));
        assertEquals(UNITS, host.outcomes(ENDED).get(Outcome.SUCCESS));
        assertEquals(UNITS, host.counted(ENDED).total(1).trials());
    }

    @ParameterizedTest
    @ValueSource(booleans = {false, true})
    void callsWhatStillComesForTheRunLate(boolean byView) {
        CountHost host = until(host(byView), ARCHIVED);
        host.feed(Events.view(ENDED, "plain", "unit-7", "late", 10), Events.click(ENDED, "wide", "unit-7", "c", 11));
        assertEquals(2, host.outcomes(ENDED).get(Outcome.LATE));
        assertEquals(0, host.openEvents(ENDED));
    }

    @ParameterizedTest
    @ValueSource(booleans = {false, true})
    void staysForgottenAfterARestart(boolean byView) {
        CountHost host = until(host(byView), ARCHIVED);
        CountView before = host.shard().view();
        for (int cleaned : List.of(0, host.log().size() / 2, host.log().size())) {
            assertEquals(before, host.restart(cleaned).shard().view(), "first " + cleaned + " changes compacted");
        }
    }

    @ParameterizedTest
    @ValueSource(booleans = {false, true})
    void keepsWhatItTellsOfLateEventsAfterARestart(boolean byView) {
        CountHost host = until(host(byView), ARCHIVED);
        host.restart(0);
        host.feed(Events.view(ENDED, "wide", "unit-3", "late", 3)).commit();
        host.restart(0);
        assertEquals(1, host.outcomes(ENDED).get(Outcome.LATE));
        assertEquals(UNITS, host.outcomes(ENDED).get(Outcome.TRIAL));
    }

    @ParameterizedTest
    @ValueSource(booleans = {false, true})
    void removesEntriesThatWereWrittenBeforeARestartToo(boolean byView) {
        CountHost host = until(host(byView), SEALED);
        assertTrue(entries(host) > 0);
        until(host.restart(host.log().size()), ARCHIVED);
        assertEquals(0, entries(host));
    }

    /** A long run of short windows has more entries than one transaction should carry. */
    @Test
    void removesABoundedNumberOfWindowsWithOneCommitAndGoesOnAfterARestart() {
        int windows = CountState.FORGOTTEN_AT_ONCE + 5;
        Plan ended = Plans.plan(ENDED)
                .counting(Duration.ofMinutes(1), Duration.ofMinutes(1), Duration.ofMinutes(1))
                .atMost(Duration.ofMinutes(windows))
                .build();
        CountHost host = CountHost.of(
                ended, Plans.plan(GOING_ON).atMost(Duration.ofDays(30)).build());
        for (int i = 0; i < windows; i++) {
            host.feed(Events.view(ENDED, "wide", "unit-" + i, "v" + i, i));
        }
        host.commit();
        until(host, windows + 2 + 24 * 60);
        assertEquals(5, entries(host));
        host.restart(host.log().size()).commit();
        assertEquals(0, entries(host));
        assertEquals(0, units(host));
        assertEquals(windows, host.outcomes(ENDED).get(Outcome.TRIAL));
    }
}
