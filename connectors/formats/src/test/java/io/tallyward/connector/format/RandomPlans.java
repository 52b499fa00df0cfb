package io.tallyward.connector.format;

import io.tallyward.engine.plan.AllocationEpoch;
import io.tallyward.engine.plan.Amendment;
import io.tallyward.engine.plan.CountRule;
import io.tallyward.engine.plan.CountRule.CountBy;
import io.tallyward.engine.plan.FutilityPlan;
import io.tallyward.engine.plan.FutilityPlan.Assumption;
import io.tallyward.engine.plan.LookSchedule;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.Run;
import io.tallyward.engine.plan.Spending;
import io.tallyward.engine.plan.Spending.Family;
import io.tallyward.engine.plan.SplitCheckPlan;
import io.tallyward.engine.plan.Tail;
import io.tallyward.engine.plan.TestPlan;
import io.tallyward.engine.plan.TestPlan.AlphaSharing;
import io.tallyward.engine.plan.TestPlan.Better;
import io.tallyward.engine.plan.TestPlan.InformationMeasure;
import io.tallyward.engine.plan.TestPlan.SpendingClock;
import io.tallyward.engine.plan.TrustLimits;
import io.tallyward.engine.plan.Variant;
import java.time.Duration;
import java.time.Instant;
import java.util.ArrayList;
import java.util.LinkedHashMap;
import java.util.List;
import java.util.Map;
import java.util.Optional;
import java.util.Random;
import java.util.TreeMap;
import java.util.function.Supplier;
import java.util.stream.Stream;

/** Seeded plans of every shape; their texts are odd, and their numbers need not make sense together. */
final class RandomPlans {

    private static final Instant FROM = Instant.parse("2026-05-04T00:00:00Z");
    private static final String[] WORDS = {"quay-banner", "", "ein Fährschiff", "\"quoted\\\"", "a\nb\u0000\u2028"};

    private final Random random;

    RandomPlans(long seed) {
        random = new Random(seed);
    }

    Plan plan() {
        List<String> names = Stream.iterate(1, i -> i + 1)
                .map(i -> i + word())
                .limit(2 + random.nextInt(4))
                .toList();
        int control = random.nextInt(names.size());
        List<Variant> variants = new ArrayList<>();
        for (int i = 0; i < names.size(); i++) {
            variants.add(new Variant(names.get(i), open(1), i == control));
        }
        return new Plan(
                "quay-banner" + random.nextInt(9),
                word(),
                word(),
                new CountRule(any(CountBy.values()), duration(), duration(), duration()),
                variants,
                test(),
                random.nextBoolean()
                        ? new LookSchedule.Every(duration())
                        : new LookSchedule.AtFractions(list(() -> open(1))),
                random.nextBoolean() ? Optional.empty() : Optional.of(futility()),
                new SplitCheckPlan(open(0.5), list(this::word)),
                new TrustLimits(open(1), open(1), open(1), duration()),
                new Run(instant(), duration(), Duration.ofDays(1 + random.nextInt(300))),
                list(() -> new AllocationEpoch(instant(), shares(names))),
                list(() -> amendment(names)));
    }

    Amendment amendment() {
        return amendment(List.of("1plain", "2wide"));
    }

    private Amendment amendment(List<String> names) {
        return new Amendment(instant(), word(), change(names));
    }

    private TestPlan test() {
        return new TestPlan(
                tail(),
                random.nextBoolean() ? Optional.empty() : Optional.of(tail()),
                any(AlphaSharing.values()),
                any(SpendingClock.values()),
                any(InformationMeasure.values()),
                open(1),
                open(1),
                open(1),
                any(Better.values()),
                random.nextInt(100));
    }

    private Tail tail() {
        return new Tail(open(0.5), spending(), random.nextBoolean() ? 0 : random.nextDouble());
    }

    private Spending spending() {
        Family family = any(Family.values());
        if (family == Family.TABLE) {
            TreeMap<Double, Double> points = new TreeMap<>(Map.of(1.0, 1.0));
            list(() -> points.put(open(1), open(1)));
            return Spending.table(points);
        }
        return new Spending(family, family.parametric() ? random.nextGaussian() : 0);
    }

    private FutilityPlan futility() {
        return switch (random.nextInt(3)) {
            case 0 -> new FutilityPlan.ErrorSpending(spending());
            case 1 -> new FutilityPlan.ConditionalPower(open(0.5), any(Assumption.values()));
            default -> new FutilityPlan.PredictivePower(open(0.5));
        };
    }

    private Amendment.Change change(List<String> names) {
        return switch (random.nextInt(3)) {
            case 0 -> new Amendment.End(instant());
            case 1 -> new Amendment.Shares(shares(names));
            default -> new Amendment.Stop();
        };
    }

    private Map<String, Double> shares(List<String> names) {
        Map<String, Double> shares = new LinkedHashMap<>();
        names.forEach(name -> shares.put(name, open(1)));
        return shares;
    }

    /** In (0, below). */
    private double open(double below) {
        return below * (random.nextDouble() + 0x1p-54) / (1 + 0x1p-50);
    }

    private Duration duration() {
        return Duration.ofMillis(random.nextLong(random.nextBoolean() ? 2_000_000_000L : 50));
    }

    private Instant instant() {
        return FROM.plusMillis(random.nextLong(40_000_000_000L));
    }

    private String word() {
        return any(WORDS);
    }

    private <T> T any(T[] values) {
        return values[random.nextInt(values.length)];
    }

    private <T> List<T> list(Supplier<T> item) {
        return Stream.generate(item).limit(random.nextInt(4)).toList();
    }
}
