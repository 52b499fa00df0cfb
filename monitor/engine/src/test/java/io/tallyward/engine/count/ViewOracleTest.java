package io.tallyward.engine.count;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.engine.count.CountOracle.Arrival;
import io.tallyward.engine.count.Counted.Place;
import io.tallyward.engine.count.WindowTally.Cell;
import io.tallyward.engine.plan.Plan;
import java.util.ArrayList;
import java.util.List;
import java.util.Map;
import java.util.Random;
import java.util.TreeMap;
import org.junit.jupiter.api.Test;

/** Counting by view against an oracle that counts the whole input in one go, over seeded streams. */
class ViewOracleTest {

    private static final int SEEDS = 60;
    private static final List<Plan> PLANS = ViewStream.plans();

    /** Feeds the records to the partitions of their units, with commits and losses of the shard, and ends the input. */
    private static List<CountHost> run(List<Arrival> arrivals, int partitions, int sources, long seed, int killOneIn) {
        Random random = new Random(seed);
        List<CountHost> hosts = new ArrayList<>();
        for (int partition = 0; partition < partitions; partition++) {
            hosts.add(new CountHost(partition, partitions, PLANS, sources));
        }
        for (Arrival arrival : arrivals) {
            CountHost host = hosts.get(RandomStream.partitionOf(arrival, partitions));
            host.shard().apply(arrival.source(), arrival.recordTimestamp(), arrival.event());
            if (random.nextInt(20) == 0) {
                host.commit();
            }
            if (random.nextInt(killOneIn) == 0) {
                host.commit().restart(random.nextInt(host.log().size() + 1));
            }
        }
        hosts.forEach(CountHost::end);
        return hosts;
    }

    private static Map<Place, Cell> cells(List<CountHost> hosts, String experiment) {
        Map<Place, Cell> cells = new TreeMap<>();
        for (CountHost host : hosts) {
            for (TallyUpdate update : host.tallies()) {
                if (update.experiment().equals(experiment)) {
                    update.windows()
                            .forEach(window -> window.cells()
                                    .forEach(cell -> cells.merge(
                                            Place.of(window.startMillis(), cell.epoch(), cell.variant()),
                                            cell,
                                            Cell::plus)));
                }
            }
        }
        return cells;
    }

    /** Tells the first cell that differs only: all of them are too many to read. */
    private static void assertSame(Map<Place, Cell> expected, Map<Place, Cell> actual, String where) {
        expected.forEach((place, cell) -> assertEquals(cell, actual.get(place), where + ", " + place));
        actual.forEach((place, cell) -> assertEquals(expected.get(place), cell, where + ", " + place));
    }

    private static OutcomeCounts outcomes(List<CountHost> hosts, String experiment) {
        return hosts.stream().map(host -> host.outcomes(experiment)).reduce(OutcomeCounts.NONE, OutcomeCounts::plus);
    }

    private static ViewOracle oracle(Plan plan, List<Arrival> arrivals, int partitions) {
        ViewOracle oracle = new ViewOracle(plan);
        for (int partition = 0; partition < partitions; partition++) {
            int own = partition;
            oracle.count(arrivals.stream()
                    .filter(arrival -> RandomStream.partitionOf(arrival, partitions) == own)
                    .toList());
        }
        return oracle;
    }

    private static long events(List<Arrival> arrivals, Plan plan) {
        return arrivals.stream()
                .filter(arrival -> arrival.event().experiment().equals(plan.experiment()))
                .count();
    }

    @Test
    void agreesWithTheOracleWhereNothingIsLate() {
        OutcomeCounts seen = OutcomeCounts.NONE;
        for (long seed = 0; seed < SEEDS; seed++) {
            int partitions = 1 + (int) (seed % 3);
            List<Arrival> arrivals = ViewStream.tame(seed, 1);
            List<CountHost> hosts = run(arrivals, partitions, 1, seed, Integer.MAX_VALUE);
            for (Plan plan : PLANS) {
                String where = "seed " + seed + ", " + plan.experiment();
                ViewOracle oracle = oracle(plan, arrivals, partitions);
                assertSame(oracle.cells(), cells(hosts, plan.experiment()), where);
                assertEquals(oracle.outcomes(), outcomes(hosts, plan.experiment()), where);
                seen = seen.plus(oracle.outcomes());
            }
        }
        for (Outcome outcome : Outcome.values()) {
            long least = outcome == Outcome.LATE ? 0 : 100;
            assertTrue(seen.get(outcome) >= least, "the streams are too tame: " + seen);
        }
        assertEquals(0, seen.get(Outcome.LATE));
    }

    @Test
    void countsTheSameInAnyOrderInWhichNothingIsLate() {
        for (long seed = 0; seed < SEEDS; seed++) {
            List<Arrival> arrivals = ViewStream.tame(seed, 2);
            List<CountHost> before = run(arrivals, 1, 2, seed, Integer.MAX_VALUE);
            List<CountHost> after =
                    run(RandomStream.shuffledWithinGrace(arrivals, seed + 1), 2 + (int) (seed % 5), 2, seed + 1, 50);
            for (Plan plan : PLANS) {
                String where = "seed " + seed + ", " + plan.experiment();
                assertSame(cells(before, plan.experiment()), cells(after, plan.experiment()), where);
                assertEquals(outcomes(before, plan.experiment()), outcomes(after, plan.experiment()), where);
            }
        }
    }

    @Test
    void countsNoViewTwiceNorAnyLateOneAndLosesNoEvent() {
        OutcomeCounts seen = OutcomeCounts.NONE;
        for (long seed = 0; seed < SEEDS; seed++) {
            int sources = 1 + (int) (seed % 2);
            List<Arrival> arrivals = ViewStream.wild(seed, sources);
            List<CountHost> hosts = run(arrivals, 1, sources, seed, Integer.MAX_VALUE);
            for (Plan plan : PLANS) {
                String where = "seed " + seed + ", " + plan.experiment();
                OutcomeCounts told = outcomes(hosts, plan.experiment());
                assertSame(oracle(plan, arrivals, 1).cells(), cells(hosts, plan.experiment()), where);
                assertEquals(events(arrivals, plan), told.total(), where);
                seen = seen.plus(told);
            }
        }
        assertTrue(seen.get(Outcome.LATE) >= 100, "the streams are too tame: " + seen);
    }

    @Test
    void goesOnAfterARestartAsIfNothingHadHappened() {
        for (long seed = 0; seed < SEEDS; seed++) {
            int sources = 1 + (int) (seed % 2);
            List<Arrival> arrivals = ViewStream.wild(seed, sources);
            List<CountHost> undisturbed = run(arrivals, 1, sources, seed, Integer.MAX_VALUE);
            List<CountHost> disturbed = run(arrivals, 1, sources, seed, 40);
            CountHost last = disturbed.get(0);
            last.restart(last.log().size());
            for (Plan plan : PLANS) {
                String where = "seed " + seed + ", " + plan.experiment();
                assertSame(cells(undisturbed, plan.experiment()), cells(disturbed, plan.experiment()), where);
                assertEquals(outcomes(undisturbed, plan.experiment()), outcomes(disturbed, plan.experiment()), where);
            }
            assertEquals(undisturbed.get(0).shard().view(), last.shard().view(), "seed " + seed);
        }
    }
}
