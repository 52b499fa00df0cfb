package io.tallyward.engine.decide;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertNotEquals;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.engine.Plans;
import io.tallyward.engine.count.Outcome;
import io.tallyward.engine.count.OutcomeCounts;
import io.tallyward.engine.count.TallyUpdate;
import io.tallyward.engine.count.WindowTally;
import io.tallyward.engine.plan.AllocationEpoch;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.Spending;
import io.tallyward.engine.plan.Spending.Family;
import io.tallyward.engine.plan.TrustLimits;
import io.tallyward.engine.plan.Variant;
import io.tallyward.engine.record.DecisionRecord;
import io.tallyward.engine.record.DecisionRecord.Comparison;
import io.tallyward.engine.record.DecisionRecord.VariantCount;
import io.tallyward.engine.record.Notice;
import io.tallyward.engine.record.RecordDigest;
import io.tallyward.engine.record.Trust;
import io.tallyward.engine.record.Verdict;
import io.tallyward.engine.verify.RecordVerifier;
import io.tallyward.statistics.boundary.BoundarySequence;
import io.tallyward.statistics.boundary.Look;
import io.tallyward.statistics.spending.SpendingFunction;
import java.time.Duration;
import java.util.ArrayList;
import java.util.Collections;
import java.util.HashMap;
import java.util.HashSet;
import java.util.List;
import java.util.Map;
import java.util.Optional;
import java.util.Random;
import java.util.Set;
import java.util.function.IntUnaryOperator;
import org.junit.jupiter.api.Test;

/**
 * What the records and notices depend on, and what not: over seeded streams of three partitions with ramps, silences,
 * crossovers and effects of every size.
 */
class DecideRecordTest {

    private static final int SEEDS = 6;
    private static final int PARTITIONS = 3;
    private static final int WINDOWS = 48;

    private static Plan plan(long seed) {
        Plans plan = Plans.plan("deck-map")
                .variants(
                        new Variant("plain", 0.4, true),
                        new Variant("coast", 0.3, false),
                        new Variant("islands", 0.3, false))
                .counting(Duration.ofMinutes(30), Duration.ofMinutes(10), Duration.ofHours(1))
                .trust(new TrustLimits(0.02, 0.02, 0.05, Duration.ofHours(3)))
                .smallestEffect(0.03)
                .atMost(Duration.ofHours(WINDOWS))
                .epochs(new AllocationEpoch(
                        Plans.FROM.plus(Duration.ofHours(20)), Map.of("plain", 0.2, "coast", 0.4, "islands", 0.4)));
        if (seed % 2 == 0) {
            plan.futility(new Spending(Family.HWANG_SHIH_DECANI, -2));
        }
        if (seed % 3 == 0) {
            plan.lookAt(0.2, 0.4, 0.7, 1.0).spending(Spending.of(Family.POCOCK));
        } else {
            plan.lookEvery(Duration.ofHours(5)).atLeast(Duration.ofHours(7));
        }
        return plan.build();
    }

    /** The updates of every partition, in its own order. */
    private static List<List<TallyUpdate>> stream(Plan plan, long seed) {
        Random random = new Random(seed);
        double effect = 0.04 * random.nextGaussian();
        List<List<TallyUpdate>> partitions = new ArrayList<>();
        for (int partition = 0; partition < PARTITIONS; partition++) {
            List<TallyUpdate> updates = new ArrayList<>();
            List<WindowTally> pending = new ArrayList<>();
            for (int window = 0; window < WINDOWS; window++) {
                if (window < 30 || window > 35) {
                    pending.add(randomWindow(plan, window, effect, random));
                }
                if (window == WINDOWS - 1 || random.nextInt(4) == 0) {
                    updates.add(DecideHost.update(
                            plan, partition, PARTITIONS, window + 1, pending.toArray(WindowTally[]::new)));
                    pending.clear();
                }
            }
            partitions.add(updates);
        }
        return partitions;
    }

    private static WindowTally randomWindow(Plan plan, int window, double effect, Random random) {
        double[] shares = plan.sharesIn(plan.epochAt(DecideHost.startOf(plan, window)));
        long[] cells = new long[6];
        for (int unit = random.nextInt(200); unit > 0; unit--) {
            double place = random.nextDouble();
            int variant = place < shares[0] ? 0 : place < shares[0] + shares[1] ? 1 : 2;
            cells[2 * variant]++;
            cells[2 * variant + 1] += random.nextDouble() < 0.2 + (variant == 2 ? effect : 0) ? 1 : 0;
        }
        OutcomeCounts besides = new OutcomeCounts.Builder()
                .add(Outcome.CROSSOVER, random.nextInt(window < 8 ? 12 : 1))
                .add(Outcome.REPEAT, random.nextInt(50))
                .build();
        return DecideHost.window(plan, window, besides, cells);
    }

    private static List<TallyUpdate> interleaved(List<List<TallyUpdate>> partitions, Random random) {
        List<List<TallyUpdate>> rests = new ArrayList<>();
        partitions.forEach(updates -> rests.add(new ArrayList<>(updates)));
        List<TallyUpdate> merged = new ArrayList<>();
        while (rests.stream().anyMatch(rest -> !rest.isEmpty())) {
            List<TallyUpdate> rest = rests.get(random.nextInt(rests.size()));
            if (!rest.isEmpty()) {
                merged.add(rest.remove(0));
            }
        }
        return merged;
    }

    private static DecideHost run(Plan plan, List<TallyUpdate> updates) {
        DecideHost host = new DecideHost(plan);
        updates.forEach(host::take);
        return host;
    }

    private static void assertSame(DecideHost expected, DecideHost actual, String where) {
        assertEquals(expected.decisions(), actual.decisions(), where);
        assertEquals(expected.notices(), actual.notices(), where);
        assertEquals(expected.view(), actual.view(), where);
    }

    @Test
    void decidesTheSameInWhateverOrderPartitionsReport() {
        Set<Verdict> verdicts = new HashSet<>();
        Set<String> kinds = new HashSet<>();
        for (long seed = 0; seed < SEEDS; seed++) {
            Plan plan = plan(seed);
            List<List<TallyUpdate>> partitions = stream(plan, seed);
            DecideHost oneByOne = run(plan, interleaved(partitions, new Random(seed)));
            List<TallyUpdate> partitionAfterPartition = new ArrayList<>();
            partitions.forEach(partitionAfterPartition::addAll);
            assertSame(oneByOne, run(plan, partitionAfterPartition), "seed " + seed + ", partition after partition");
            Collections.reverse(partitions);
            assertSame(oneByOne, run(plan, interleaved(partitions, new Random(-seed))), "seed " + seed);
            verdicts.addAll(oneByOne.view().verdicts().values());
            kinds.addAll(oneByOne.noticeKinds());
        }
        assertTrue(verdicts.size() >= 3, "the streams are too tame: " + verdicts);
        assertTrue(kinds.containsAll(Set.of("crossover", "starved", "recovered")), "too tame: " + kinds);
    }

    @Test
    void decidesTheSameWhenRestartedAfterEveryUpdate() {
        Random share = new Random(11);
        for (long seed = 0; seed < SEEDS; seed++) {
            Plan plan = plan(seed);
            List<TallyUpdate> updates = interleaved(stream(plan, seed), new Random(seed));
            DecideHost undisturbed = run(plan, updates);
            List<IntUnaryOperator> cleanings = List.of(size -> size, size -> 0, size -> share.nextInt(size + 1));
            DecideHost disturbed = new DecideHost(plan);
            IntUnaryOperator cleaned = cleanings.get((int) (seed % 3));
            for (TallyUpdate update : updates) {
                disturbed
                        .take(update)
                        .restart(cleaned.applyAsInt(disturbed.log().size()));
            }
            assertSame(undisturbed, disturbed, "seed " + seed);
        }
    }

    @Test
    void ignoresAnUpdateThatIsToldTwice() {
        for (long seed = 0; seed < SEEDS; seed++) {
            Plan plan = plan(seed);
            List<TallyUpdate> updates = interleaved(stream(plan, seed), new Random(seed));
            DecideHost once = run(plan, updates);
            DecideHost twice = new DecideHost(plan);
            updates.forEach(update -> twice.take(update).take(update));
            assertSame(once, twice, "seed " + seed);
        }
    }

    @Test
    void chainsItsRecordsAndNamesEachNoticeOnce() {
        for (long seed = 0; seed < SEEDS; seed++) {
            Plan plan = plan(seed);
            DecideHost host = run(plan, interleaved(stream(plan, seed), new Random(seed)));
            String previous = DecisionRecord.NO_PREVIOUS;
            int sequence = 0;
            assertEquals(plan, host.records().get(0).plan(), "seed " + seed);
            for (DecisionRecord record : host.records()) {
                assertEquals(++sequence, record.sequence(), "seed " + seed);
                assertEquals(previous, record.previous(), "seed " + seed);
                assertEquals(RecordDigest.of(record), record.hash(), "seed " + seed);
                previous = record.hash();
            }
            assertEquals(previous, host.view().lastRecord());
            long ids = host.notices().stream()
                    .map(notice -> notice.id())
                    .distinct()
                    .count();
            assertEquals(host.notices().size(), ids, "seed " + seed);
            host.notices().forEach(notice -> assertTrue(notice.id().matches("notice_[0-9a-f]{32}"), notice.id()));
        }
    }

    /** The records alone lead to each other, whatever went wrong with the data; some streams lose units of one variant. */
    @Test
    void canBeDecidedAgainFromItsRecordsAlone() {
        Set<Trust> trusts = new HashSet<>();
        for (long seed = 0; seed < 10 * SEEDS; seed++) {
            Plan plan = plan(seed);
            List<TallyUpdate> updates = interleaved(stream(plan, seed), new Random(seed));
            RecordVerifier verifier = new RecordVerifier();
            for (DecisionRecord record :
                    run(plan, seed % 4 == 3 ? thinned(updates) : updates).records()) {
                assertEquals(Optional.empty(), verifier.take(record), "seed " + seed);
                trusts.add(record.trust());
            }
        }
        assertTrue(
                trusts.containsAll(Set.of(Trust.MISMATCH, Trust.CROSSOVER, Trust.STARVED, Trust.SOUND)),
                trusts::toString);
    }

    /** The same streams with a quarter of the units of the last variant lost from the tenth hour on. */
    private static List<TallyUpdate> thinned(List<TallyUpdate> updates) {
        return updates.stream()
                .map(update -> new TallyUpdate(
                        update.experiment(),
                        update.planDigest(),
                        update.partition(),
                        update.partitions(),
                        update.sealedUntilMillis(),
                        update.cause(),
                        update.windows().stream().map(DecideRecordTest::thinned).toList()))
                .toList();
    }

    private static WindowTally thinned(WindowTally window) {
        if (window.startMillis() < Plans.FROM.plus(Duration.ofHours(10)).toEpochMilli()) {
            return window;
        }
        OutcomeCounts.Builder outcomes = new OutcomeCounts.Builder().add(window.outcomes());
        List<WindowTally.Cell> cells = new ArrayList<>();
        for (WindowTally.Cell cell : window.cells()) {
            long lost = cell.variant() == 2 ? cell.trials() / 4 : 0;
            long lostSuccesses = Math.min(cell.successes(), lost);
            outcomes.add(Outcome.TRIAL, -lost).add(Outcome.SUCCESS, -lostSuccesses);
            cells.add(WindowTally.Cell.ofUnits(
                    cell.epoch(), cell.variant(), cell.trials() - lost, cell.successes() - lostSuccesses));
        }
        return new WindowTally(window.startMillis(), cells, outcomes.build());
    }

    @Test
    void recordsWhatItsOwnCountsSay() {
        int looks = 0;
        for (long seed = 0; seed < SEEDS; seed++) {
            Plan plan = plan(seed);
            DecideHost host = run(plan, interleaved(stream(plan, seed), new Random(seed)));
            Map<String, List<Request>> paths = new HashMap<>();
            Map<String, PlanDesign> designs = new HashMap<>();
            plan.challengers().forEach(variant -> designs.put(variant.name(), PlanDesign.of(plan, variant)));
            for (DecisionRecord record : host.decisions()) {
                for (Comparison look : record.comparisons()) {
                    assertRecomputed(
                            plan,
                            designs.get(look.variant()),
                            record,
                            look,
                            levels(plan, look.variant(), host.notices(), record),
                            paths.computeIfAbsent(look.variant(), name -> new ArrayList<>()),
                            "seed " + seed + ", " + record.windowEnd());
                    looks++;
                }
            }
        }
        assertTrue(looks > 25, "looks: " + looks);
    }

    /** What a look of the past spent by; over epochs looks are correlated by the variance of the score. */
    private record Request(double clock, double time, boolean benefitOpen) {}

    /** Holm's procedure in each direction: alpha over the challengers whose finding in that direction is not told yet. */
    private static TailLevels levels(Plan plan, String variant, List<Notice> notices, DecisionRecord record) {
        double benefit = plan.test().benefit().alpha();
        double harm = plan.test().harm().orElseThrow().alpha();
        return new TailLevels(
                benefit / (plan.challengers().size() - others("benefit", variant, notices, record)),
                harm / (plan.challengers().size() - others("harm", variant, notices, record)));
    }

    private static long others(String direction, String variant, List<Notice> notices, DecisionRecord record) {
        return notices.stream()
                .filter(notice -> notice.kind() == Notice.Kind.STOP
                        && !notice.variant().equals(variant)
                        && !notice.at().isAfter(record.windowEnd())
                        && notice.summary().contains(direction + " boundary is crossed"))
                .count();
    }

    /** Cochran's statistic by its textbook sums, then the boundary that spends what the plan allows by then. */
    private static void assertRecomputed(
            Plan plan,
            PlanDesign design,
            DecisionRecord record,
            Comparison look,
            TailLevels levels,
            List<Request> path,
            String where) {
        double weight = 0;
        double excess = 0;
        double variance = 0;
        for (int epoch = 0; epoch <= plan.epochs().size(); epoch++) {
            VariantCount own = count(record, epoch, look.variant());
            VariantCount control = count(record, epoch, "plain");
            double all = own.trials() + control.trials();
            if (own.trials() > 0 && control.trials() > 0) {
                double w = own.trials() * (double) control.trials() / all;
                double pooled = (own.successes() + control.successes()) / all;
                weight += w;
                excess +=
                        w * ((double) own.successes() / own.trials() - (double) control.successes() / control.trials());
                variance += w * pooled * (1 - pooled);
            }
        }
        assertEquals(excess / Math.sqrt(variance), look.z(), 1e-9, where);
        assertEquals(excess / weight, look.difference(), 1e-12, where);
        double information = weight * weight / variance;
        assertEquals(information, look.information(), 1e-9 * information, where);
        assertEquals(information / design.maximumInformation(), look.informationFraction(), 1e-9, where);

        boolean runEnds = !record.windowEnd().isBefore(plan.run().end());
        boolean benefitOpen = runEnds
                || !record.windowEnd()
                        .isBefore(plan.run().from().plus(plan.run().atLeast()));
        boolean last = runEnds || (look.informationFraction() >= 1 && benefitOpen);
        double rate = design.pooledRate();
        double clock = plan.epochs().isEmpty()
                ? look.informationFraction()
                : variance / (design.maximumInformation() * Math.pow(rate * (1 - rate), 2));
        path.add(new Request(clock, last ? 1 : look.informationFraction(), benefitOpen));
        BoundarySequence sequence = new BoundarySequence();
        Look expected = null;
        for (Request request : path) {
            SpendingFunction spending = SpendingFunctions.of(plan.test().benefit());
            expected = sequence.next(
                    request.clock(),
                    request.benefitOpen() ? spending.spent(levels.benefit(), request.time()) : 0,
                    spending.spent(levels.harm(), request.time()));
        }
        assertEquals(levels.both(), look.level(), 1e-15, where);
        Verdict found = look.held() == null ? look.verdict() : look.held();
        assertEquals(finding(look, expected, last), found, where);
        assertBoundary(expected.upper(), look.upper(), where);
        assertBoundary(expected.lower(), look.lower(), where);
        assertEquals(expected.upperSpent() + expected.lowerSpent(), look.alphaSpent(), 1e-15, where);
    }

    private static Verdict finding(Comparison look, Look boundaries, boolean last) {
        if (look.z() >= boundaries.upper() || look.z() <= boundaries.lower()) {
            return look.z() > 0 ? Verdict.STOP_BENEFIT : Verdict.STOP_HARM;
        }
        if (last) {
            return Verdict.EXHAUSTED;
        }
        return look.futility() != null && look.z() < look.futility() ? Verdict.STOP_FUTILITY : Verdict.CONTINUE;
    }

    private static void assertBoundary(double expected, Double recorded, String where) {
        assertEquals(Double.isInfinite(expected), recorded == null, where);
        if (recorded != null) {
            assertEquals(expected, recorded, 1e-9, where);
        }
    }

    private static VariantCount count(DecisionRecord record, int epoch, String variant) {
        return record.counts().stream()
                .filter(count -> count.epoch() == epoch && count.variant().equals(variant))
                .findFirst()
                .orElse(new VariantCount(epoch, variant, 0, 0));
    }

    @Test
    void differsInItsHashWhereTheHistoryDiffers() {
        Plan plan = plan(1);
        DecideHost one = new DecideHost(plan);
        DecideHost other = new DecideHost(plan);
        one.take(DecideHost.update(plan, 0, 1, 5, DecideHost.window(plan, 0, 400, 80, 300, 60, 300, 60)));
        other.take(DecideHost.update(plan, 0, 1, 5, DecideHost.window(plan, 0, 400, 80, 300, 60, 300, 61)));
        assertNotEquals(one.lastDecision().hash(), other.lastDecision().hash());
    }
}
