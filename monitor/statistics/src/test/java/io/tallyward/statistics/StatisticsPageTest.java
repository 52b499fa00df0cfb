package io.tallyward.statistics;

import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.statistics.ReferenceTable.Row;
import io.tallyward.statistics.boundary.BoundarySequence;
import io.tallyward.statistics.boundary.Design;
import io.tallyward.statistics.boundary.DesignRequest;
import io.tallyward.statistics.boundary.ExitProbabilities;
import io.tallyward.statistics.boundary.Look;
import io.tallyward.statistics.distribution.Normal;
import io.tallyward.statistics.inference.ConditionalPower;
import io.tallyward.statistics.inference.Estimate;
import io.tallyward.statistics.inference.Interval;
import io.tallyward.statistics.inference.RepeatedInterval;
import io.tallyward.statistics.inference.StagewiseInference;
import io.tallyward.statistics.proportion.Margin;
import io.tallyward.statistics.proportion.MarginPlan;
import io.tallyward.statistics.proportion.SampleSize;
import io.tallyward.statistics.proportion.StratifiedComparison;
import io.tallyward.statistics.proportion.Stratum;
import io.tallyward.statistics.proportion.ZStatistic;
import io.tallyward.statistics.spending.SpendingFunction;
import io.tallyward.statistics.split.SequentialSplitTest;
import java.io.IOException;
import java.io.UncheckedIOException;
import java.nio.file.Files;
import java.nio.file.Path;
import java.util.ArrayList;
import java.util.Arrays;
import java.util.List;
import java.util.Locale;
import java.util.Optional;
import org.apache.commons.math3.distribution.BinomialDistribution;
import org.junit.jupiter.api.Test;

/** Every worked figure of STATISTICS.md, computed again and looked for in its text. */
class StatisticsPageTest {

    private static final SpendingFunction LATE = SpendingFunction.obrienFlemingType();
    private static final SpendingFunction EARLY = SpendingFunction.pocockType();
    private static final double TAIL = 0.025;

    private final String page = read();

    private static String read() {
        try {
            return Files.readString(Path.of("STATISTICS.md")).replaceAll("\\s+", " ");
        } catch (IOException e) {
            throw new UncheckedIOException(e);
        }
    }

    private void says(String format, Object... values) {
        String text = String.format(Locale.ROOT, format, values);
        assertTrue(page.contains(text), "STATISTICS.md says: " + text);
    }

    @Test
    void naivePeeking() {
        List<String> looks = new ArrayList<>();
        List<String> errors = new ArrayList<>();
        for (int k : new int[] {1, 2, 3, 5, 10, 20, 50, 100, 200}) {
            Row row = ReferenceTable.read("simulated_oc.csv")
                    .rows()
                    .filter(each -> each.number("nominal_alpha_two_sided") == 0.05 && each.count("looks") == k)
                    .findFirst()
                    .orElseThrow();
            looks.add(String.valueOf(k));
            errors.add(String.format(Locale.ROOT, "%.3f", row.number("type1_error_exact")));
        }
        says("| looks | %s |", String.join(" | ", looks));
        says("| false alarms | %s |", String.join(" | ", errors));
    }

    @Test
    void costOfLooking() {
        for (int k : new int[] {1, 2, 5, 10, 20, 60}) {
            Design late = design(LATE, k, Optional.empty());
            Design early = design(EARLY, k, Optional.empty());
            says(
                    "| %d | %.3f | %.2f | %.3f | %.2f |",
                    k,
                    late.inflation(),
                    late.inflation() * late.expectedFraction(),
                    early.inflation(),
                    early.inflation() * early.expectedFraction());
        }
    }

    @Test
    void overrunAndUnderrun() {
        says("boundary %.3f instead of %.3f", last(0.5, 1.1, 1), last(0.5, 1.0, 1));
        says("ends at 0.8 has the last boundary %.3f", last(0.5, 0.8, 1));
        says("against %.3f had the look been one of several", last(0.5, 0.8, 0.8));
    }

    private static double last(double first, double information, double clock) {
        BoundarySequence sequence = new BoundarySequence();
        next(sequence, LATE, TAIL, first, first);
        return next(sequence, LATE, TAIL, information, clock).upper();
    }

    @Test
    void clocks() {
        BoundarySequence information = new BoundarySequence();
        BoundarySequence calendar = new BoundarySequence();
        double[] t = {0.4, 0.7, 1};
        double[] days = {0.25, 0.5, 1};
        List<String> own = new ArrayList<>();
        List<String> other = new ArrayList<>();
        for (int k = 0; k < 3; k++) {
            own.add(String.format(
                    Locale.ROOT,
                    "%.3f",
                    next(information, LATE, TAIL, t[k], t[k]).upper()));
            other.add(String.format(
                    Locale.ROOT,
                    "%.3f",
                    next(calendar, LATE, TAIL, t[k], days[k]).upper()));
        }
        says("information clock %s, calendar clock %s", String.join(", ", own), String.join(", ", other));
    }

    @Test
    void silentTail() {
        BoundarySequence both = new BoundarySequence();
        BoundarySequence silent = new BoundarySequence();
        SpendingFunction delayed = LATE.startingAt(0.5);
        for (double t : new double[] {0.25, 0.5, 0.75, 1}) {
            Look usual = next(both, LATE, TAIL, t, t);
            Look look = silent.next(t, delayed.spent(TAIL, t), EARLY.spent(0.01, t));
            says(
                    "| %.2f | %.3f | %s | %.3f |",
                    t,
                    usual.upper(),
                    Double.isInfinite(look.upper()) ? "none" : String.format(Locale.ROOT, "%.3f", look.upper()),
                    look.lower());
        }
    }

    @Test
    void futility() {
        Design design = design(LATE, 4, Optional.of(SpendingFunction.hwangShihDecani(-2)));
        double[] t = {0.25, 0.5, 0.75, 1};
        double[] upper = design.looks().stream()
                .mapToDouble(look -> look.boundaries().upper())
                .toArray();
        double[] lower =
                design.looks().stream().mapToDouble(look -> look.futility()).toArray();
        ExitProbabilities none = ExitProbabilities.of(t, upper, lower, 0);
        says("bounds %.2f, %.2f, %.2f", lower[0], lower[1], lower[2]);
        says("inflation from %.3f to %.3f", design(LATE, 4, Optional.empty()).inflation(), design.inflation());
        says(
                "from %.2f to %.2f of the planned information",
                design(LATE, 4, Optional.empty()).expectedFractionWithoutEffect(), none.expectedInformation());
        says("chance of a false benefit from %.4f to %.4f", TAIL, none.totalUpper());
    }

    @Test
    void conditionalAndPredictivePower() {
        double drift = Normal.upperQuantile(TAIL) + Normal.quantile(0.8);
        for (double t : new double[] {0.2, 0.5, 0.8}) {
            ConditionalPower power = ConditionalPower.of(
                    t, 1, new double[] {1}, new double[] {1.96}, new double[] {Double.NEGATIVE_INFINITY});
            says(
                    "| %.1f | %.2f | %.2f | %.2f | %.2f |",
                    t, power.withoutEffect(), power.under(drift), power.underTrend(), power.predictive());
        }
    }

    @Test
    void afterAStop() {
        BoundarySequence sequence = new BoundarySequence();
        List<Look> looks = new ArrayList<>();
        for (double t : new double[] {0.2, 0.4}) {
            looks.add(next(sequence, EARLY, TAIL, t, t));
        }
        double z = looks.get(1).upper() + 0.1;
        StagewiseInference stop = StagewiseInference.of(looks, z);
        Estimate estimate = stop.estimate(0.95);
        Interval repeated = RepeatedInterval.at(looks.get(1), z, 0.95);
        double root = Math.sqrt(0.4);
        says("stops at its second look with z = %.2f", z);
        says(
                "| naive | %.2f | %.2f to %.2f | %.4f |",
                z / root, (z - 1.96) / root, (z + 1.96) / root, 2 * Normal.survival(z));
        says(
                "| stage-wise | %.2f | %.2f to %.2f | %.4f |",
                estimate.value(),
                estimate.interval().lower(),
                estimate.interval().upper(),
                stop.pReported(true));
        says("| repeated | | %.2f to %.2f | |", repeated.lower(), repeated.upper());
    }

    @Test
    void passingOn() {
        BoundarySequence half = new BoundarySequence();
        BoundarySequence full = new BoundarySequence();
        List<String> before = new ArrayList<>();
        List<String> after = new ArrayList<>();
        for (double t : new double[] {0.25, 0.5, 0.75, 1}) {
            before.add(String.format(
                    Locale.ROOT, "%.3f", next(half, LATE, TAIL / 2, t, t).upper()));
            after.add(String.format(
                    Locale.ROOT, "%.3f", next(full, LATE, TAIL, t, t).upper()));
        }
        says("%s at alpha/2, %s at alpha", String.join(", ", before), String.join(", ", after));
    }

    @Test
    void guardrail() {
        double drift = Normal.upperQuantile(TAIL) + Normal.quantile(0.8);
        MarginPlan plan = MarginPlan.withoutDifference(Margin.relative(0.12, -0.05), 0.12);
        SampleSize guarded = plan.size(plan.maximumInformation(drift), 0.5, 0.5);
        SampleSize plain = SampleSize.of(SampleSize.maximumInformation(drift, 0.006), 0.12, 0.006, 0.5, 0.5);
        says("%,d trials per arm, against %,d", guarded.variantTrials(), plain.variantTrials());
    }

    @Test
    void simpson() {
        List<Stratum> epochs = List.of(new Stratum(50, 500, 950, 9500), new Stratum(450, 9000, 50, 1000));
        double crude = ZStatistic.pooled(new Stratum(500, 9500, 1000, 10500))
                .orElseThrow()
                .z();
        says("z = %.1f", crude);
        assertTrue(StratifiedComparison.of(epochs).orElseThrow().z() == 0);
        Row row = ReferenceTable.read("stratified.csv")
                .rows()
                .filter(each -> each.text("case_id").equals("simpson_reversal"))
                .findFirst()
                .orElseThrow();
        says("crude z %.1f, stratified z %.1f", row.number("crude_z_pooled"), row.number("cochran_z"));
    }

    /**
     * Two epochs of equal size with unlike rates, a look at the end of each. The score, the weighted sum of differences, has
     * increments of variance w p (1 - p); the information of the difference grows on another clock.
     */
    @Test
    void unlikeEpochs() {
        for (double[] rates : new double[][] {{0.12, 0.12}, {0.12, 0.10}, {0.12, 0.15}, {0.10, 0.20}, {0.20, 0.10}}) {
            double first = rates[0] * (1 - rates[0]);
            double both = first + rates[1] * (1 - rates[1]);
            double information = (1 / first) / (4 / both);
            double score = first / both;
            says(
                    "| %.2f, %.2f | %.2f | %.2f | %.4f | %.4f |",
                    rates[0],
                    rates[1],
                    information,
                    score,
                    actualError(LATE, information, score),
                    actualError(EARLY, information, score));
        }
    }

    private static double actualError(SpendingFunction spending, double clock, double score) {
        BoundarySequence sequence = new BoundarySequence();
        double[] upper = {
            next(sequence, spending, TAIL, clock, clock).upper(),
            next(sequence, spending, TAIL, 1, 1).upper()
        };
        double[] lower = {-upper[0], -upper[1]};
        ExitProbabilities exits = ExitProbabilities.of(new double[] {score, 1}, upper, lower, 0);
        return exits.totalUpper() + exits.totalLower();
    }

    @Test
    void unitsAndViews() {
        ReferenceTable.read("ratio_metric.csv").rows().forEach(row -> {
            if (List.of("one_view_each", "medium", "heavy", "large").contains(row.text("case_id"))) {
                says(
                        "| `%s` | %.1f | %.2f | %.2f |",
                        row.text("case_id"),
                        row.number("design_effect_treatment"),
                        row.number("z_naive_per_view_pooled"),
                        row.number("z"));
            }
        });
    }

    @Test
    void splitCheck() {
        double[] even = {1, 1};
        for (long n : new long[] {10_000, 100_000, 1_000_000}) {
            long gap = 0;
            while (SequentialSplitTest.logBayesFactor(1000, even, new long[] {n / 2 + gap, n / 2 - gap})
                    < Math.log(1000)) {
                gap++;
            }
            says("| %,d | %.2f%% |", n, 100.0 * (n / 2 + gap) / n);
        }
    }

    /** Rare successes, no effect: given m of both arms together, the variant has a binomial number of them. */
    @Test
    void normalApproximation() {
        for (int m : new int[] {20, 50, 200, 1000, 5000}) {
            List<String> cells = new ArrayList<>();
            for (double share : new double[] {0.5, 0.1, 0.9}) {
                for (double nominal : new double[] {0.025, 1e-3, 1e-5}) {
                    cells.add(String.format(
                            Locale.ROOT, "%.2g", exceedance(m, share, Normal.upperQuantile(nominal)) / nominal));
                }
            }
            says("| %,d | %s |", m, String.join(" | ", cells));
        }
    }

    private static double exceedance(int m, double share, double z) {
        BinomialDistribution law = new BinomialDistribution(null, m, share);
        double p = 0;
        for (int x = 0; x <= m; x++) {
            p += (x - m * share) / Math.sqrt(m * share * (1 - share)) >= z ? law.probability(x) : 0;
        }
        return p;
    }

    private static Look next(
            BoundarySequence sequence, SpendingFunction spending, double level, double t, double clock) {
        double spent = spending.spent(level, clock);
        return sequence.next(t, spent, spent);
    }

    private static Design design(SpendingFunction spending, int looks, Optional<SpendingFunction> futility) {
        double[] t = new double[looks];
        Arrays.setAll(t, k -> (k + 1.0) / looks);
        return Design.of(new DesignRequest(TAIL, true, spending, 0.8, t, futility));
    }
}
