package io.tallyward.statistics.proportion;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertThrows;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.statistics.ReferenceTable;
import io.tallyward.statistics.distribution.Normal;
import java.util.ArrayList;
import java.util.Collections;
import java.util.List;
import java.util.Random;
import java.util.function.ToDoubleBiFunction;
import org.apache.commons.math3.distribution.BinomialDistribution;
import org.junit.jupiter.api.Test;

class NonInferiorityTest {

    private static final long SEED = 1990;

    /** Relative; ends are printed with 15 digits, and z is a difference of two of them over a standard error. */
    private static final double SCORE = 1e-9;

    /** Relative; the same formula by another way. */
    private static final double ROUNDING = 1e-12;

    private static final double ALPHA = 0.025;
    private static final double CRITICAL = Normal.upperQuantile(ALPHA);

    /**
     * Miettinen and Nurminen's interval inverts this test but for the factor N/(N - 1) of the variance: with an end of the
     * reference's interval as the margin, z is the interval's number of standard deviations.
     */
    @Test
    void isAtItsCriticalValueWhereTheReferenceIntervalEnds() {
        int[] compared = {0};
        ReferenceTable.read("two_proportions.csv").rows().forEach(row -> {
            Stratum counts = new Stratum(
                    row.count("x_treatment"), row.count("n_treatment"), row.count("x_control"), row.count("n_control"));
            double all = (double) counts.trials() + counts.controlTrials();
            double deviations = Normal.upperQuantile((1 - row.number("confidence")) / 2);
            double critical = deviations * Math.sqrt(all / (all - 1));
            for (String end : List.of("mn_lower", "mn_upper")) {
                double at = row.number(end);
                if (Math.abs(at) < 1 && at != 0) {
                    double z = z(counts, new Margin(at));
                    boolean outwards = at < 0 == end.equals("mn_lower");
                    assertEquals(
                            outwards ? critical : -critical,
                            z,
                            tolerance(row.number("se_unpooled"), at),
                            row.text("case_id") + " " + end);
                    compared[0]++;
                }
            }
        });
        assertTrue(compared[0] > 60, "ends compared: " + compared[0]);
    }

    /** Fifteen printed digits of the end, in standard errors. */
    private static double tolerance(double standardError, double end) {
        return SCORE + (standardError > 0 ? 1e-14 * Math.abs(end) / standardError : 0);
    }

    /** The constrained likelihood maximised over a fine grid, as a slower method. */
    @Test
    void takesTheVarianceAtTheMostLikelyRates() {
        Random random = new Random(SEED);
        for (int run = 0; run < 60; run++) {
            long n1 = 1 + random.nextInt(80);
            long n0 = 1 + random.nextInt(80);
            Stratum counts = new Stratum(random.nextInt((int) n1 + 1), n1, random.nextInt((int) n0 + 1), n0);
            double nothing = 1.6 * random.nextDouble() - 0.8;
            double information = NonInferiority.of(List.of(counts), new Margin(nothing))
                    .orElseThrow()
                    .information();
            String where = "seed " + SEED + ", run " + run + ", " + counts + " at " + nothing;
            assertEquals(1 / gridVariance(counts, nothing), information, 2e-6 * information, where);
        }
    }

    /** As the margin closes, the constrained rates become the pooled one: the test of no difference. */
    @Test
    void becomesTheStratifiedComparisonAsTheMarginCloses() {
        Random random = new Random(SEED + 1);
        for (int run = 0; run < 200; run++) {
            List<Stratum> strata = strata(random);
            StratifiedComparison plain = StratifiedComparison.of(strata).orElseThrow();
            NonInferiority found =
                    NonInferiority.of(strata, Margin.below(1e-13)).orElseThrow();
            String where = "seed " + (SEED + 1) + ", run " + run;
            assertEquals(plain.z(), found.z(), 1e-9, where);
            assertEquals(plain.difference(), found.difference(), ROUNDING, where);
            assertEquals(plain.information(), found.information(), 1e-9 * plain.information(), where);
        }
    }

    @Test
    void mirrorsItselfWhenSuccessIsCalledFailure() {
        Random random = new Random(SEED + 2);
        for (int run = 0; run < 200; run++) {
            List<Stratum> strata = strata(random);
            List<Stratum> renamed = strata.stream()
                    .map(s -> new Stratum(
                            s.trials() - s.successes(),
                            s.trials(),
                            s.controlTrials() - s.controlSuccesses(),
                            s.controlTrials()))
                    .toList();
            double width = 0.01 + 0.3 * random.nextDouble();
            NonInferiority fall = NonInferiority.of(strata, Margin.below(width)).orElseThrow();
            NonInferiority rise =
                    NonInferiority.of(renamed, Margin.above(width)).orElseThrow();
            String where = "seed " + (SEED + 2) + ", run " + run;
            assertEquals(fall.z(), rise.z(), 1e-10 * (1 + Math.abs(fall.z())), where);
            assertEquals(fall.information(), rise.information(), 1e-10 * fall.information(), where);
        }
    }

    @Test
    void growsWithTheMarginAndWithTheEvidence() {
        double last = Double.NEGATIVE_INFINITY;
        for (double width = 0.001; width < 0.5; width += 0.01) {
            double z = z(new Stratum(180, 1000, 200, 1000), Margin.below(width));
            assertTrue(z > last, "width " + width);
            last = z;
        }
        assertTrue(z(new Stratum(190, 1000, 200, 1000), Margin.below(0.05))
                > z(new Stratum(180, 1000, 200, 1000), Margin.below(0.05)));
        assertTrue(z(new Stratum(0, 50, 0, 50), Margin.below(0.1)) > 0, "defined without a success");
    }

    /** All outcomes of two binomials, weighed: the true size at the margin, for both directions, with unequal arms too. */
    @Test
    void keepsItsLevelAtTheMarginByExactEnumeration() {
        double[][] settings = {
            {150, 150, 0.2, 0.05}, {150, 150, 0.5, 0.1}, {80, 240, 0.3, 0.1}, {240, 80, 0.3, 0.1}, {200, 200, 0.1, 0.05}
        };
        List<Double> own = new ArrayList<>();
        List<Double> unpooled = new ArrayList<>();
        for (double[] c : settings) {
            for (Margin margin : List.of(Margin.below(c[3]), Margin.above(c[3]))) {
                own.add(size((int) c[0], (int) c[1], c[2], margin, NonInferiorityTest::z));
                unpooled.add(size((int) c[0], (int) c[1], c[2], margin, NonInferiorityTest::unpooled));
            }
        }
        // of a nominal 0.025; half a unit of the last digit stated
        assertEquals(0.0229, Collections.min(own), 5e-5);
        assertEquals(0.0277, Collections.max(own), 5e-5);
        assertEquals(0.0192, Collections.min(unpooled), 5e-5);
        assertEquals(0.0332, Collections.max(unpooled), 5e-5);
    }

    /** Three looks' worth of strata with a ramp; rates that drift, always apart by the margin. */
    @Test
    void keepsItsLevelAtTheMarginOverStrata() {
        Random random = new Random(SEED + 3);
        int runs = 20_000;
        BinomialDistribution[] variant = {
            new BinomialDistribution(null, 100, 0.17),
            new BinomialDistribution(null, 900, 0.27),
            new BinomialDistribution(null, 500, 0.12)
        };
        BinomialDistribution[] control = {
            new BinomialDistribution(null, 900, 0.20),
            new BinomialDistribution(null, 900, 0.30),
            new BinomialDistribution(null, 500, 0.15)
        };
        int rejected = 0;
        for (int run = 0; run < runs; run++) {
            List<Stratum> strata = new ArrayList<>();
            for (int i = 0; i < variant.length; i++) {
                strata.add(new Stratum(
                        draw(variant[i], random),
                        variant[i].getNumberOfTrials(),
                        draw(control[i], random),
                        control[i].getNumberOfTrials()));
            }
            rejected +=
                    NonInferiority.of(strata, Margin.below(0.03)).orElseThrow().z() >= CRITICAL ? 1 : 0;
        }
        // four standard deviations of a share
        assertEquals(ALPHA, (double) rejected / runs, 4 * Math.sqrt(ALPHA / runs), "seed " + (SEED + 3));
    }

    @Test
    void readsItsProbabilityFromTheStatistic() {
        NonInferiority found = NonInferiority.of(List.of(new Stratum(195, 1000, 200, 1000)), Margin.below(0.04))
                .orElseThrow();
        assertEquals(Normal.survival(found.z()), found.statistic().pGreater());
        assertEquals(-0.005, found.difference(), ROUNDING);
    }

    @Test
    void isEmptyWithoutTrialsInBothArms() {
        Margin margin = Margin.below(0.1);
        assertTrue(NonInferiority.of(List.of(), margin).isEmpty());
        assertTrue(NonInferiority.of(List.of(new Stratum(3, 9, 0, 0)), margin).isEmpty());
        Stratum full = new Stratum(10, 100, 14, 100);
        assertEquals(
                NonInferiority.of(List.of(full), margin),
                NonInferiority.of(List.of(new Stratum(0, 0, 4, 9), full), margin));
    }

    @Test
    void refusesWhatIsNoMargin() {
        for (double width : new double[] {0, -0.1, 1, Double.NaN}) {
            assertThrows(IllegalArgumentException.class, () -> Margin.below(width));
            assertThrows(IllegalArgumentException.class, () -> Margin.above(width));
        }
        for (double difference : new double[] {0, -1, 1, Double.NaN}) {
            assertThrows(IllegalArgumentException.class, () -> new Margin(difference));
        }
        assertThrows(IllegalArgumentException.class, () -> Margin.below(0.1).distance(Double.NaN));
        assertThrows(IllegalArgumentException.class, () -> new NonInferiority(Double.NaN, 0, 1));
        assertThrows(IllegalArgumentException.class, () -> new NonInferiority(0, 0, 0));
    }

    private static double z(Stratum counts, Margin margin) {
        return NonInferiority.of(List.of(counts), margin).orElseThrow().z();
    }

    /** What a textbook would do: each arm's own variance. Nothing varying speaks for nothing. */
    private static double unpooled(Stratum counts, Margin margin) {
        RateDifference difference = RateDifference.of(counts).orElseThrow();
        double beyond = margin.distance(difference.value());
        return difference.standardError() > 0 ? beyond / difference.standardError() : 0;
    }

    private static double size(
            int n1, int n0, double controlRate, Margin margin, ToDoubleBiFunction<Stratum, Margin> test) {
        BinomialDistribution variant = new BinomialDistribution(null, n1, controlRate + margin.nullDifference());
        BinomialDistribution control = new BinomialDistribution(null, n0, controlRate);
        double size = 0;
        for (int x1 = 0; x1 <= n1; x1++) {
            double p1 = variant.probability(x1);
            for (int x0 = 0; x0 <= n0 && p1 > 1e-12; x0++) {
                double p = p1 * control.probability(x0);
                if (p > 1e-13 && test.applyAsDouble(new Stratum(x1, n1, x0, n0), margin) >= CRITICAL) {
                    size += p;
                }
            }
        }
        return size;
    }

    private static int draw(BinomialDistribution law, Random random) {
        return law.inverseCumulativeProbability(random.nextDouble());
    }

    private static List<Stratum> strata(Random random) {
        List<Stratum> strata = new ArrayList<>();
        for (int i = 0; i <= random.nextInt(3); i++) {
            long n1 = 50 + random.nextInt(1000);
            long n0 = 50 + random.nextInt(1000);
            strata.add(new Stratum(1 + random.nextInt((int) n1 - 1), n1, 1 + random.nextInt((int) n0 - 1), n0));
        }
        return strata;
    }

    private static double gridVariance(Stratum counts, double d) {
        double from = Math.max(0, -d);
        double to = Math.min(1, 1 - d);
        double best = from;
        for (int refinement = 0; refinement < 5; refinement++) {
            double step = (to - from) / 400;
            double most = Double.NEGATIVE_INFINITY;
            double start = from;
            for (int i = 0; i <= 400; i++) {
                double likelihood = logLikelihood(counts, start + i * step, d);
                if (likelihood > most) {
                    most = likelihood;
                    best = start + i * step;
                }
            }
            from = Math.max(Math.max(0, -d), best - 2 * step);
            to = Math.min(Math.min(1, 1 - d), best + 2 * step);
        }
        return (best + d) * (1 - best - d) / counts.trials() + best * (1 - best) / counts.controlTrials();
    }

    private static double logLikelihood(Stratum counts, double p0, double d) {
        return term(counts.successes(), p0 + d)
                + term(counts.trials() - counts.successes(), 1 - p0 - d)
                + term(counts.controlSuccesses(), p0)
                + term(counts.controlTrials() - counts.controlSuccesses(), 1 - p0);
    }

    private static double term(long count, double rate) {
        return count == 0 ? 0 : count * Math.log(rate);
    }
}
