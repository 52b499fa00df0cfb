package io.tallyward.engine.count;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.engine.count.CountOracle.Arrival;
import io.tallyward.engine.event.RejectReason;
import io.tallyward.engine.plan.Plan;
import java.util.ArrayList;
import java.util.Collections;
import java.util.List;
import java.util.Random;
import org.junit.jupiter.api.Test;

/** The shard against an oracle that counts the whole input in one go, over seeded streams. */
class CountOracleTest {

    private static final int SEEDS = 50;
    private static final List<Plan> PLANS = RandomStream.plans();

    private static List<CountHost> hosts(int partitions, int sources) {
        List<CountHost> hosts = new ArrayList<>();
        for (int partition = 0; partition < partitions; partition++) {
            hosts.add(new CountHost(partition, partitions, PLANS, sources));
        }
        return hosts;
    }

    /** Feeds the records to the partitions of their units, with commits here and there, and ends the input. */
    private static List<CountHost> run(List<Arrival> arrivals, int partitions, int sources, Random commits) {
        List<CountHost> hosts = hosts(partitions, sources);
        int commitEvery = 1 + commits.nextInt(100);
        for (Arrival arrival : arrivals) {
            CountHost host = hosts.get(RandomStream.partitionOf(arrival, partitions));
            host.shard().apply(arrival.source(), arrival.recordTimestamp(), arrival.event());
            if (commits.nextInt(commitEvery) == 0) {
                host.commit();
            }
        }
        hosts.forEach(CountHost::end);
        return hosts;
    }

    private static Counted counted(List<CountHost> hosts, String experiment) {
        return Counted.of(
                experiment,
                hosts.stream().flatMap(host -> host.tallies().stream()).toList());
    }

    private static OutcomeCounts outcomes(List<CountHost> hosts, String experiment) {
        return hosts.stream().map(host -> host.outcomes(experiment)).reduce(OutcomeCounts.NONE, OutcomeCounts::plus);
    }

    private static OutcomeCounts told(List<CountHost> hosts, String experiment) {
        return hosts.stream()
                .flatMap(host -> host.tallies().stream())
                .filter(update -> update.experiment().equals(experiment))
                .flatMap(update -> update.windows().stream())
                .map(WindowTally::outcomes)
                .reduce(OutcomeCounts.NONE, OutcomeCounts::plus);
    }

    private static CountOracle oracle(List<Arrival> arrivals, int partitions) {
        CountOracle oracle = new CountOracle(PLANS);
        for (int partition = 0; partition < partitions; partition++) {
            int own = partition;
            oracle.count(arrivals.stream()
                    .filter(arrival -> RandomStream.partitionOf(arrival, partitions) == own)
                    .toList());
        }
        return oracle;
    }

    @Test
    void agreesWithTheOracleOnCountsOutcomesAndRejects() {
        OutcomeCounts seen = OutcomeCounts.NONE;
        for (long seed = 0; seed < SEEDS; seed++) {
            String where = "seed " + seed;
            int partitions = 1 + (int) (seed % 3);
            List<Arrival> arrivals = RandomStream.wild(seed, 1);
            List<CountHost> hosts = run(arrivals, partitions, 1, new Random(seed));
            CountOracle oracle = oracle(arrivals, partitions);
            for (Plan plan : PLANS) {
                String experiment = plan.experiment();
                assertEquals(oracle.counted(experiment), counted(hosts, experiment), where + ", " + experiment);
                assertEquals(oracle.outcomes(experiment), outcomes(hosts, experiment), where + ", " + experiment);
                seen = seen.plus(oracle.outcomes(experiment));
            }
            for (RejectReason reason : RejectReason.values()) {
                long rejects = hosts.stream()
                        .mapToLong(host -> host.shard().view().rejected().get(reason))
                        .sum();
                assertEquals(oracle.rejected(reason), rejects, where + ", " + reason);
            }
        }
        for (Outcome outcome : Outcome.values()) {
            long least = outcome == Outcome.DUPLICATE ? 0 : 100;
            assertTrue(seen.get(outcome) >= least, "the streams are too tame: " + seen);
        }
    }

    @Test
    void addsUpToTheEventsReadAfterEveryRecord() {
        for (long seed = 0; seed < SEEDS / 5; seed++) {
            List<Arrival> arrivals = RandomStream.wild(seed, 1);
            CountHost host = hosts(1, 1).get(0);
            long read = 0;
            for (Arrival arrival : arrivals) {
                host.shard().apply(0, arrival.recordTimestamp(), arrival.event());
                read++;
                CountView view = host.shard().view();
                long accounted = view.experiments().values().stream()
                                .mapToLong(counts -> counts.outcomes().total() + counts.openEvents())
                                .sum()
                        + view.rejected().values().stream()
                                .mapToLong(Long::longValue)
                                .sum();
                assertEquals(read, accounted, "seed " + seed + ", after record " + read);
            }
        }
    }

    @Test
    void tellsEveryOutcomeInsideTheRunWithExactlyOneWindow() {
        for (long seed = 0; seed < SEEDS; seed++) {
            List<CountHost> hosts = run(RandomStream.tame(seed, 1), 2, 1, new Random(seed));
            for (Plan plan : PLANS) {
                OutcomeCounts all = outcomes(hosts, plan.experiment());
                OutcomeCounts outside = new OutcomeCounts.Builder()
                        .add(Outcome.OUTSIDE, all.get(Outcome.OUTSIDE))
                        .build();
                assertEquals(
                        all, told(hosts, plan.experiment()).plus(outside), "seed " + seed + ", " + plan.experiment());
            }
        }
    }

    @Test
    void countsTheSameInAnyOrderInWhichNothingIsLateAndOverAnyNumberOfPartitions() {
        for (long seed = 0; seed < SEEDS; seed++) {
            List<Arrival> arrivals = RandomStream.tame(seed, 1);
            List<CountHost> before = run(arrivals, 1, 1, new Random(seed));
            List<CountHost> after = run(
                    RandomStream.shuffledWithinGrace(arrivals, seed + 1),
                    2 + (int) (seed % 5),
                    1,
                    new Random(seed + 1));
            for (Plan plan : PLANS) {
                String where = "seed " + seed + ", " + plan.experiment();
                assertEquals(0, outcomes(before, plan.experiment()).get(Outcome.LATE), where);
                assertEquals(counted(before, plan.experiment()), counted(after, plan.experiment()), where);
                assertEquals(outcomes(before, plan.experiment()), outcomes(after, plan.experiment()), where);
            }
        }
    }

    @Test
    void countsTheSameHoweverTwoSourcesInterleave() {
        for (long seed = 0; seed < SEEDS; seed++) {
            List<Arrival> arrivals = RandomStream.wild(seed, 2);
            CountOracle oracle = oracle(arrivals, 1);
            List<Arrival> other = interleavedAnew(arrivals, new Random(seed));
            for (List<Arrival> order : List.of(arrivals, other)) {
                List<CountHost> hosts = run(order, 1, 2, new Random(seed));
                for (Plan plan : PLANS) {
                    String where = "seed " + seed + ", " + plan.experiment();
                    assertEquals(oracle.counted(plan.experiment()), counted(hosts, plan.experiment()), where);
                    assertEquals(
                            oracle.outcomes(plan.experiment()).total(),
                            outcomes(hosts, plan.experiment()).total(),
                            where);
                }
            }
        }
    }

    /** Keeps the order within each source and none between them. */
    private static List<Arrival> interleavedAnew(List<Arrival> arrivals, Random random) {
        List<List<Arrival>> rests = new ArrayList<>();
        for (int source = 0; source < 2; source++) {
            int own = source;
            rests.add(new ArrayList<>(
                    arrivals.stream().filter(arrival -> arrival.source() == own).toList()));
            Collections.reverse(rests.get(source));
        }
        List<Arrival> merged = new ArrayList<>();
        double lean = random.nextDouble();
        while (merged.size() < arrivals.size()) {
            List<Arrival> next = rests.get(random.nextDouble() < lean ? 0 : 1);
            if (!next.isEmpty()) {
                merged.add(next.remove(next.size() - 1));
            }
        }
        return merged;
    }
}
