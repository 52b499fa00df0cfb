package io.tallyward.engine.count;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertFalse;
import static org.junit.jupiter.api.Assertions.assertThrows;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.engine.Events;
import io.tallyward.engine.Plans;
import io.tallyward.engine.count.CountOracle.Arrival;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.PlanChangedException;
import io.tallyward.engine.shard.StateChange;
import java.io.ByteArrayInputStream;
import java.io.DataInputStream;
import java.io.IOException;
import java.io.UncheckedIOException;
import java.util.List;
import java.util.Map;
import java.util.Random;
import java.util.TreeMap;
import java.util.function.IntUnaryOperator;
import org.junit.jupiter.api.Test;

/**
 * A shard that is lost and started again from its log, compacted as far as it may be, goes on as if nothing had happened.
 * Records read after the last commit are read again, as after an aborted transaction.
 */
class CountRestartTest {

    private static final int SEEDS = 15;
    private static final List<Plan> PLANS = RandomStream.plans();
    private static final String BANNER = "quay-banner";

    private static CountHost host() {
        return host(1);
    }

    private static CountHost host(int sources) {
        return new CountHost(0, 1, PLANS, sources);
    }

    /**
     * Runs a stream with commits after the same records whatever happens; with a chance of one in {@code killOneIn} per
     * record the shard is lost.
     *
     * @param cleaned how much of a log of the given size has been compacted
     */
    private static CountHost run(List<Arrival> arrivals, long seed, int killOneIn, IntUnaryOperator cleaned) {
        CountHost host = host(sources(seed));
        Random kills = new Random(seed);
        int commitEvery = 1 + (int) (seed % 40);
        int committed = 0;
        int next = 0;
        while (next < arrivals.size()) {
            Arrival arrival = arrivals.get(next++);
            host.shard().apply(arrival.source(), arrival.recordTimestamp(), arrival.event());
            if (next % commitEvery == 0) {
                host.commit();
                committed = next;
            }
            if (kills.nextInt(killOneIn) == 0) {
                host.restart(cleaned.applyAsInt(host.log().size()));
                next = committed;
            }
        }
        return host.commit();
    }

    private static int sources(long seed) {
        return 1 + (int) (seed % 2);
    }

    private static void assertSame(CountHost expected, CountHost actual, String where) {
        assertEquals(expected.tallies(), actual.tallies(), where);
        assertEquals(expected.shard().view(), actual.shard().view(), where);
    }

    private static void assertSurvives(IntUnaryOperator cleaned) {
        for (long seed = 0; seed < SEEDS; seed++) {
            List<Arrival> arrivals = RandomStream.wild(seed, sources(seed));
            CountHost undisturbed = run(arrivals, seed, Integer.MAX_VALUE, cleaned);
            CountHost disturbed = run(arrivals, seed, 60, cleaned);
            assertSame(undisturbed, disturbed, "seed " + seed);
            disturbed.restart(cleaned.applyAsInt(disturbed.log().size()));
            assertSame(undisturbed, disturbed, "restarted before the end, seed " + seed);
            assertSame(undisturbed.end(), disturbed.end(), "after the end, seed " + seed);
            disturbed.restart(cleaned.applyAsInt(disturbed.log().size()));
            assertSame(undisturbed, disturbed, "restarted after the end, seed " + seed);
        }
    }

    @Test
    void goesOnFromACompactedLog() {
        assertSurvives(size -> size);
    }

    @Test
    void goesOnFromARawLog() {
        assertSurvives(size -> 0);
    }

    @Test
    void goesOnFromALogThatIsCompactedInPart() {
        Random share = new Random(7);
        assertSurvives(size -> share.nextInt(size + 1));
    }

    @Test
    void tellsTheSameHoweverItIsCommitted() {
        for (long seed = 0; seed < SEEDS; seed++) {
            List<Arrival> arrivals = RandomStream.wild(seed, 1);
            CountHost often = run(arrivals, 0, Integer.MAX_VALUE, size -> size).end();
            CountHost seldom =
                    run(arrivals, 38, Integer.MAX_VALUE, size -> size).end();
            for (Plan plan : PLANS) {
                assertEquals(
                        windows(often, plan.experiment()),
                        windows(seldom, plan.experiment()),
                        "seed " + seed + ", " + plan.experiment());
            }
        }
    }

    private static List<WindowTally> windows(CountHost host, String experiment) {
        return host.tallies().stream()
                .filter(update -> update.experiment().equals(experiment))
                .flatMap(update -> update.windows().stream())
                .toList();
    }

    @Test
    void forgetsAClickThatWasAnOrphanBeforeTheRestart() {
        CountHost host = host();
        host.feed(Events.click(BANNER, "wide", "ada", "c", 3)).commit();
        host.feed(Events.view(BANNER, "wide", "ben", "v", 45)).commit();
        assertEquals(1, host.openEvents(BANNER));
        host.restart(0);
        assertEquals(1, host.openEvents(BANNER));
        host.feed(Events.view(BANNER, "wide", "ada", "v2", 46)).end();
        assertEquals(1, host.outcomes(BANNER).get(Outcome.ORPHAN));
    }

    @Test
    void remembersALateViewOfATrialThatAnotherSourceHoldsOpen() {
        CountHost host = host(2);
        host.feedFrom(1, Events.view(BANNER, "wide", "ada", "v", 2)).commit();
        host.feedFrom(0, Events.view(BANNER, "wide", "clock", "t", 45))
                .feedFrom(0, Events.view(BANNER, "wide", "ada", "v2", 3))
                .commit();
        host.restart(0).end();
        assertEquals(1, host.outcomes(BANNER).get(Outcome.REPEAT));
    }

    @Test
    void keepsIdlenessAcrossARestart() {
        CountHost host = host();
        host.feed(Events.view(BANNER, "wide", "ada", "v", 3));
        host.shard().passTime(0, Events.at(100), true);
        host.shard().passTime(0, Events.at(105), true);
        host.commit();
        CountView before = host.shard().view();
        host.restart(0);
        assertEquals(before, host.shard().view());
    }

    @Test
    void tellsInputTopicsApartByTheirNames() {
        CountHost host = host(2);
        host.feedFrom(0, Events.view(BANNER, "wide", "ada", "v", 40))
                .feedFrom(1, Events.view(BANNER, "wide", "ben", "w", 20))
                .commit();
        host.restartReading("events-1", "events-0");
        assertEquals(Events.at(20), host.shard().view().watermarkMillis().orElseThrow());
        host.feedFrom(0, Events.view(BANNER, "wide", "cy", "x", 30));
        assertEquals(Events.at(30), host.shard().view().watermarkMillis().orElseThrow());
    }

    @Test
    void waitsForATopicThatWasAdded() {
        CountHost host = host();
        host.feed(Events.view(BANNER, "wide", "ada", "v", 40)).commit();
        host.restartReading("clicks", "events-0");
        assertFalse(host.shard().hasRead("clicks"));
        assertTrue(host.shard().hasRead("events-0"));
        assertTrue(host.shard().view().watermarkMillis().isEmpty());
        host.feedFrom(0, Events.click(BANNER, "wide", "ada", "c", 41)).commit();
        assertEquals(Events.at(40), host.shard().view().watermarkMillis().orElseThrow());
        host.restartReading("clicks", "events-0");
        assertTrue(host.shard().hasRead("clicks"));
    }

    @Test
    void notesATopicThatWasAddedEvenIfItIsEmpty() {
        CountHost host = host();
        host.feed(Events.view(BANNER, "wide", "ada", "v", 40)).commit();
        host.restartReading("events-0", "clicks").commit();
        host.restart(0);
        assertTrue(host.shard().hasRead("clicks"));
    }

    @Test
    void doesNotWaitForATopicThatWasTakenAwayAndRemembersIt() {
        CountHost host = host(2);
        host.feedFrom(0, Events.view(BANNER, "wide", "ada", "v", 40))
                .feedFrom(1, Events.view(BANNER, "wide", "ben", "w", 20))
                .commit();
        host.restartReading("events-0");
        assertEquals(Events.at(40), host.shard().view().watermarkMillis().orElseThrow());
        host.feed(Events.view(BANNER, "wide", "cy", "x", 41)).commit();
        host.restartReading("events-0", "events-1");
        assertTrue(host.shard().hasRead("events-1"));
        assertEquals(Events.at(20), host.shard().view().watermarkMillis().orElseThrow());
    }

    @Test
    void keepsNoMoreKeysThanOpenEntriesAndSealedWindows() {
        for (long seed = 0; seed < SEEDS; seed++) {
            CountHost host = host();
            int applied = 0;
            for (Arrival arrival : RandomStream.wild(seed, 1)) {
                host.shard().apply(arrival.source(), arrival.recordTimestamp(), arrival.event());
                if (++applied % 25 == 0) {
                    host.commit();
                    assertBounded(host, "seed " + seed + ", after record " + applied);
                }
            }
            host.end();
            assertBounded(host, "seed " + seed + ", after the end");
            assertTrue(
                    keys(host).stream().noneMatch(key -> key.kind() == 'o'),
                    "seed " + seed + ": open entries are left after the end");
        }
    }

    /** What a key says: its kind, and for the entries of a window its experiment and start. */
    private record Key(char kind, String experiment, long window) {

        static Key of(StateChange change) {
            try (DataInputStream in = new DataInputStream(new ByteArrayInputStream(change.key()))) {
                char kind = (char) in.readByte();
                String experiment = kind == 'w' ? "" : in.readUTF();
                return new Key(kind, experiment, kind == 'o' || kind == 's' ? in.readLong() : 0);
            } catch (IOException e) {
                throw new UncheckedIOException(e);
            }
        }
    }

    private static List<Key> keys(CountHost host) {
        return host.log().live().stream().map(Key::of).toList();
    }

    /** One shard entry, one per experiment, one per sealed window with trials, and open entries of open windows only. */
    private static void assertBounded(CountHost host, String where) {
        Map<String, Long> sealedUntil = new TreeMap<>();
        host.tallies().forEach(update -> sealedUntil.merge(update.experiment(), update.sealedUntilMillis(), Math::max));
        List<Key> keys = keys(host);
        long sealedWindows = host.tallies().stream()
                .flatMap(update -> update.windows().stream())
                .filter(window -> !window.cells().isEmpty())
                .count();
        assertEquals(
                sealedWindows, keys.stream().filter(key -> key.kind() == 's').count(), where);
        assertTrue(keys.stream().filter(key -> key.kind() == 'w').count() <= 1, where);
        assertTrue(keys.stream().filter(key -> key.kind() == 'e').count() <= PLANS.size(), where);
        for (Key key : keys) {
            long sealed = sealedUntil.getOrDefault(key.experiment(), Long.MIN_VALUE);
            assertTrue(key.kind() != 'o' || key.window() >= sealed, () -> where + ": " + key + " is past " + sealed);
        }
    }

    @Test
    void refusesAPlanThatHasChanged() {
        Plan counted = Plans.plan(BANNER).build();
        Plan changed = Plans.plan(BANNER).alpha(0.01).build();
        CountHost host = CountHost.of(counted);
        host.feed(Events.view(BANNER, "wide", "ada", "v", 3)).commit();
        CountShard shard = new CountShard(0, 1, List.of(changed), CountHost.settings(), List.of("events"));
        PlanChangedException refused =
                assertThrows(PlanChangedException.class, () -> host.log().replay(shard::restore));
        assertEquals(BANNER, refused.experiment());
    }

    @Test
    void refusesAnotherKeyOfTheUnitHash() {
        Plan plan = Plans.plan(BANNER).build();
        CountHost host = CountHost.of(plan);
        host.feed(Events.view(BANNER, "wide", "ada", "v", 3)).commit();
        CountSettings rekeyed = new CountSettings(CountHost.MAX_SKEW, CountHost.IDLE_AFTER, new byte[] {7});
        CountShard shard = new CountShard(0, 1, List.of(plan), rekeyed, List.of("events"));
        UnitKeyChangedException refused =
                assertThrows(UnitKeyChangedException.class, () -> host.log().replay(shard::restore));
        assertTrue(refused.getMessage().startsWith("unit key: it is not the one"), refused.getMessage());
    }

    @Test
    void refusesStateThatAnotherVersionWrote() {
        CountHost host = host();
        IllegalStateException refused =
                assertThrows(IllegalStateException.class, () -> host.shard().restore(new byte[] {'h'}, new byte[8]));
        assertTrue(refused.getMessage().contains("unknown kind h"), refused.getMessage());
        assertTrue(refused.getMessage().contains("another version"), refused.getMessage());
    }

    @Test
    void leavesTheStateOfAnExperimentWithoutAPlanAlone() {
        CountHost host = CountHost.of(Plans.plan(BANNER).build());
        host.feed(Events.view(BANNER, "wide", "ada", "v", 3), Events.view(BANNER, "wide", "ben", "v2", 99))
                .commit();
        CountShard shard = new CountShard(0, 1, List.of(), CountHost.settings(), List.of("events-0"));
        host.log().replay(shard::restore);
        assertEquals(Map.of(), shard.view().experiments());
        assertEquals(List.of(), shard.drain().state());
    }
}
