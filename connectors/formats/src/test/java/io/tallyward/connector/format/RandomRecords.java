package io.tallyward.connector.format;

import io.tallyward.engine.count.Outcome;
import io.tallyward.engine.count.OutcomeCounts;
import io.tallyward.engine.count.SealCause;
import io.tallyward.engine.count.TallyUpdate;
import io.tallyward.engine.count.WindowTally;
import io.tallyward.engine.record.Adjusted;
import io.tallyward.engine.record.Clustering;
import io.tallyward.engine.record.DecisionRecord;
import io.tallyward.engine.record.DecisionRecord.Comparison;
import io.tallyward.engine.record.DecisionRecord.Occasion;
import io.tallyward.engine.record.DecisionRecord.Split;
import io.tallyward.engine.record.DecisionRecord.VariantCount;
import io.tallyward.engine.record.Estimated;
import io.tallyward.engine.record.Notice;
import io.tallyward.engine.record.Outlook;
import io.tallyward.engine.record.Silence;
import io.tallyward.engine.record.SplitOrigin;
import io.tallyward.engine.record.SplitOrigin.PlannedUnits;
import io.tallyward.engine.record.SplitOrigin.SegmentSplit;
import io.tallyward.engine.record.SplitPeak;
import io.tallyward.engine.record.Trust;
import io.tallyward.engine.record.UnitTotals;
import io.tallyward.engine.record.Verdict;
import java.time.Instant;
import java.util.LinkedHashMap;
import java.util.List;
import java.util.Map;
import java.util.Random;
import java.util.function.Supplier;
import java.util.stream.Stream;

/** Seeded records that are valid and otherwise as odd as their types allow. */
final class RandomRecords {

    private static final String[] WORDS = {
        "quay-banner",
        "fare-chip",
        "plain",
        "",
        "ein Fährschiff",
        "\u26f4\ufe0f \ud83d\udea2",
        "\"quoted\\\"",
        "a\nb\u0000\u2028",
        "</script>"
    };

    private final Random random;
    private final RandomPlans plans;

    RandomRecords(long seed) {
        random = new Random(seed);
        plans = new RandomPlans(seed);
    }

    TallyUpdate tally() {
        int partitions = 1 + random.nextInt(64);
        return new TallyUpdate(
                word(),
                digest(),
                random.nextInt(partitions),
                partitions,
                random.nextLong(),
                any(SealCause.values()),
                list(() -> new WindowTally(random.nextLong(), list(this::cell), list(this::segment), outcomes())));
    }

    DecisionRecord decision() {
        return new DecisionRecord(
                word(),
                1 + random.nextInt(1000),
                any(Occasion.values()),
                instant(),
                digest(),
                random.nextBoolean() ? null : plans.plan(),
                random.nextBoolean() ? null : plans.amendment(),
                list(() -> new VariantCount(
                        random.nextInt(4),
                        word(),
                        count(),
                        count(),
                        random.nextBoolean() ? null : new UnitTotals(count(), count(), count(), count()))),
                outcomes(),
                count(),
                new Split(
                        real(),
                        random.nextDouble(),
                        Math.abs(real()),
                        random.nextInt(9),
                        random.nextDouble(),
                        random.nextBoolean() ? null : peak(),
                        random.nextBoolean() ? null : origin()),
                any(Trust.values()),
                word(),
                random.nextBoolean() ? null : new Silence(word(), instant(), count()),
                any(Verdict.values()),
                list(this::comparison),
                "1.0",
                digest(),
                digest());
    }

    private SplitPeak peak() {
        return new SplitPeak(
                Math.abs(real()), list(() -> new SplitPeak.EpochUnits(random.nextInt(5), word(), count())));
    }

    private SplitOrigin origin() {
        return new SplitOrigin(
                random.nextInt(5),
                instant(),
                instant(),
                real(),
                list(this::plannedUnits),
                random.nextBoolean()
                        ? null
                        : new SegmentSplit(
                                word(),
                                word(),
                                list(this::plannedUnits),
                                list(this::plannedUnits),
                                real(),
                                random.nextDouble(),
                                random.nextDouble(),
                                random.nextInt(99),
                                random.nextBoolean()));
    }

    private PlannedUnits plannedUnits() {
        return new PlannedUnits(word(), random.nextDouble(), count());
    }

    Notice notice() {
        Map<String, String> facts = new LinkedHashMap<>();
        for (int i = random.nextInt(5); i > 0; i--) {
            facts.put(i + word(), word());
        }
        return new Notice(
                "n_" + random.nextInt(Integer.MAX_VALUE),
                any(Notice.Kind.values()),
                any(Notice.Severity.values()),
                word(),
                word(),
                instant(),
                word(),
                facts,
                word(),
                digest());
    }

    String word() {
        return any(WORDS);
    }

    <T> T any(T[] values) {
        return values[random.nextInt(values.length)];
    }

    private Comparison comparison() {
        return new Comparison(
                word(),
                1 + random.nextInt(30),
                real(),
                real(),
                real(),
                random.nextDouble(),
                random.nextDouble(),
                random.nextDouble(),
                realOrNull(),
                realOrNull(),
                realOrNull(),
                real(),
                realOrNull(),
                realOrNull(),
                random.nextBoolean() ? null : estimated(),
                random.nextBoolean()
                        ? null
                        : new Outlook(
                                random.nextDouble(), random.nextDouble(), random.nextDouble(), random.nextDouble()),
                random.nextBoolean() ? null : adjusted(),
                random.nextBoolean() ? null : new Clustering(real(), Math.abs(real())),
                any(Verdict.values()),
                random.nextBoolean() ? null : any(Verdict.values()),
                word());
    }

    private Estimated estimated() {
        return new Estimated(real(), realOrNull(), realOrNull());
    }

    private Adjusted adjusted() {
        return new Adjusted(
                random.nextDouble(),
                random.nextDouble(),
                estimated(),
                estimated(),
                random.nextBoolean() ? null : estimated());
    }

    private WindowTally.Cell cell() {
        long trials = count();
        long successes = trials == 0 ? 0 : random.nextLong(trials + 1);
        if (random.nextBoolean()) {
            return WindowTally.Cell.ofUnits(random.nextInt(5), random.nextInt(5), trials, successes);
        }
        long products = upTo(successes, Long.MAX_VALUE);
        return new WindowTally.Cell(
                random.nextInt(5),
                random.nextInt(5),
                upTo(0, trials),
                trials,
                successes,
                upTo(StrictMath.max(trials, products), Long.MAX_VALUE),
                products,
                upTo(successes, products));
    }

    private WindowTally.SegmentCell segment() {
        return new WindowTally.SegmentCell(
                word(), word(), random.nextInt(5), random.nextInt(5), upTo(1, Long.MAX_VALUE));
    }

    private long upTo(long least, long most) {
        return least + (most == least ? 0 : random.nextLong(most - least));
    }

    private OutcomeCounts outcomes() {
        OutcomeCounts.Builder outcomes = new OutcomeCounts.Builder()
                .add(OutcomeCounts.of(
                        random.longs(Outcome.values().length, 0, Long.MAX_VALUE).toArray()));
        for (int variant = random.nextInt(4); variant > 0; variant--) {
            outcomes.addOrphans(variant, random.nextLong(Long.MAX_VALUE));
        }
        return outcomes.build();
    }

    /** Any bit pattern that is a finite number: subnormal, negative zero and extreme ones included. */
    private double real() {
        return switch (random.nextInt(8)) {
            case 0 -> -0.0;
            case 1 -> Double.MIN_VALUE;
            case 2 -> Double.MAX_VALUE;
            case 3 -> 0.1 * random.nextInt(100);
            default ->
                Stream.generate(() -> Double.longBitsToDouble(random.nextLong()))
                        .filter(Double::isFinite)
                        .findFirst()
                        .orElseThrow();
        };
    }

    private Double realOrNull() {
        return random.nextBoolean() ? null : (Double) real();
    }

    private long count() {
        return random.nextLong(Long.MAX_VALUE - 1);
    }

    private Instant instant() {
        long seconds = random.nextLong(-62_167_219_200L, 253_402_300_800L);
        return Instant.ofEpochSecond(seconds, random.nextBoolean() ? 0 : random.nextInt(1_000_000_000));
    }

    private String digest() {
        return String.format("%016x", random.nextLong()).repeat(4);
    }

    private <T> List<T> list(Supplier<T> item) {
        return Stream.generate(item).limit(random.nextInt(4)).toList();
    }
}
