package io.tallyward.statistics.proportion;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertFalse;
import static org.junit.jupiter.api.Assertions.assertThrows;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.statistics.distribution.Normal;
import java.util.List;
import java.util.Random;
import org.apache.commons.math3.distribution.BinomialDistribution;
import org.junit.jupiter.api.Test;

class MarginPlanTest {

    private static final long SEED = 1447;
    private static final double ALPHA = 0.025;
    private static final double POWER = 0.8;
    private static final double DRIFT = Normal.upperQuantile(ALPHA) + Normal.quantile(POWER);

    /** Relative; a handful of roundings. */
    private static final double ROUNDING = 1e-13;

    @Test
    void asksForTheSquaredDriftOverTheDistance() {
        Margin margin = Margin.below(0.006);
        MarginPlan same = MarginPlan.withoutDifference(margin, 0.12);
        assertEquals(DRIFT / 0.006 * (DRIFT / 0.006), same.maximumInformation(DRIFT), ROUNDING * 1e6);
        assertEquals(0.006, same.distance(), ROUNDING);
        assertEquals(0.004, new MarginPlan(margin, 0.12, -0.002).distance(), ROUNDING);
        assertEquals(0.008, new MarginPlan(Margin.above(0.006), 0.12, -0.002).distance(), ROUNDING);
    }

    /** Expected counts put into the test give the information and the drift that were planned, with any shares. */
    @Test
    void gathersTheInformationItWasAskedFor() {
        for (double[] shares : new double[][] {{0.5, 0.5}, {0.8, 0.2}, {0.1, 0.3}}) {
            for (Margin margin : List.of(Margin.below(0.02), Margin.above(0.02))) {
                MarginPlan plan = new MarginPlan(margin, 0.2, 0.001);
                double information = plan.maximumInformation(DRIFT);
                SampleSize size = plan.size(information, shares[0], shares[1]);
                assertEquals(
                        shares[0] / shares[1], (double) size.controlTrials() / size.variantTrials(), 2e-3, "shares");
                // a thousand times as many, so that rounding to whole successes does not show
                long trials = 1000 * size.variantTrials();
                long controlTrials = 1000 * size.controlTrials();
                Stratum expected =
                        new Stratum(Math.round(0.201 * trials), trials, Math.round(0.2 * controlTrials), controlTrials);
                NonInferiority found =
                        NonInferiority.of(List.of(expected), margin).orElseThrow();
                assertEquals(1000 * information, found.information(), 2e-3 * 1000 * information);
                assertEquals(Math.sqrt(1000) * DRIFT, found.z(), 2e-3 * Math.sqrt(1000) * DRIFT);
            }
        }
    }

    /** Farrington and Manning's own formula for one look, from memory, with separate variances. */
    @Test
    void isCloseToTheFormulaForASingleLook() {
        double worstEven = 0;
        double worstUneven = 0;
        for (double rate : new double[] {0.05, 0.12, 0.3, 0.5, 0.8}) {
            for (double sign : new double[] {-1, 1}) {
                Margin margin = new Margin(sign * 0.1 * Math.min(rate, 1 - rate));
                MarginPlan plan = MarginPlan.withoutDifference(margin, rate);
                worstEven = Math.max(worstEven, departure(plan, 0.5));
                worstUneven = Math.max(worstUneven, Math.max(departure(plan, 0.2), departure(plan, 0.8)));
            }
        }
        assertTrue(worstEven < 0.001, "equal shares: " + worstEven);
        assertTrue(worstUneven < 0.018, "one to four: " + worstUneven);
    }

    private static double departure(MarginPlan plan, double variantShare) {
        double rate = plan.baseline();
        double found = plan.size(plan.maximumInformation(DRIFT), 1 - variantShare, variantShare)
                .population();
        double without = found / plan.maximumInformation(DRIFT);
        double with = rate * (1 - rate) * (1 / variantShare + 1 / (1 - variantShare));
        double deviations = Normal.upperQuantile(ALPHA) * Math.sqrt(without) + Normal.quantile(POWER) * Math.sqrt(with);
        double formula = deviations * deviations / (plan.distance() * plan.distance());
        return Math.abs(found / formula - 1);
    }

    @Test
    void hasThePowerItWasPlannedFor() {
        Random random = new Random(SEED);
        for (Margin margin : List.of(Margin.below(0.04), Margin.above(0.04))) {
            MarginPlan plan = MarginPlan.withoutDifference(margin, 0.2);
            SampleSize size = plan.size(plan.maximumInformation(DRIFT), 0.6, 0.4);
            BinomialDistribution variant = new BinomialDistribution(null, (int) size.variantTrials(), 0.2);
            BinomialDistribution control = new BinomialDistribution(null, (int) size.controlTrials(), 0.2);
            int runs = 10_000;
            int found = 0;
            for (int run = 0; run < runs; run++) {
                Stratum counts = new Stratum(
                        variant.inverseCumulativeProbability(random.nextDouble()),
                        size.variantTrials(),
                        control.inverseCumulativeProbability(random.nextDouble()),
                        size.controlTrials());
                found +=
                        NonInferiority.of(List.of(counts), margin).orElseThrow().z() >= Normal.upperQuantile(ALPHA)
                                ? 1
                                : 0;
            }
            // a point for the plan's single variance, and 2.5 standard deviations of a share
            assertEquals(POWER, (double) found / runs, 0.01 + 0.01, "seed " + SEED + ", " + margin);
        }
    }

    @Test
    void takesRelativeMarginsAndEffects() {
        assertEquals(Margin.below(0.12 * 0.05), Margin.relative(0.12, -0.05));
        assertEquals(Margin.above(0.12 * 0.05), Margin.relative(0.12, 0.05));
        assertTrue(Margin.relative(0.12, -0.05).guardsAgainstFall());
        assertFalse(Margin.relative(0.12, 0.05).guardsAgainstFall());
        assertEquals(0.006, SampleSize.absoluteEffect(0.12, 0.05), 1e-17);
        assertEquals(-0.006, SampleSize.absoluteEffect(0.12, -0.05), 1e-17);
    }

    @Test
    void refusesWhatCannotBePlanned() {
        Margin margin = Margin.below(0.1);
        List<Runnable> refused = List.of(
                () -> MarginPlan.withoutDifference(margin, 0.1),
                () -> MarginPlan.withoutDifference(Margin.above(0.1), 0.95),
                () -> MarginPlan.withoutDifference(margin, Double.NaN),
                () -> new MarginPlan(margin, 0.5, -0.1),
                () -> new MarginPlan(margin, 0.5, -0.2),
                () -> new MarginPlan(margin, 0.5, 0.5),
                () -> new MarginPlan(margin, 0.5, Double.NaN),
                () -> MarginPlan.withoutDifference(margin, 0.5).maximumInformation(0),
                () -> MarginPlan.withoutDifference(margin, 0.5).size(0, 0.5, 0.5),
                () -> MarginPlan.withoutDifference(margin, 0.5).size(1e30, 0.5, 0.5),
                () -> MarginPlan.withoutDifference(margin, 0.5).size(100, 0.5, 0.6),
                () -> MarginPlan.withoutDifference(margin, 0.5).size(100, 0, 0.5),
                () -> Margin.relative(0.12, 0),
                () -> Margin.relative(0.12, Double.NaN),
                () -> SampleSize.absoluteEffect(0.5, 1),
                () -> SampleSize.absoluteEffect(0.5, -1),
                () -> SampleSize.absoluteEffect(0, 0.1));
        refused.forEach(call -> assertThrows(IllegalArgumentException.class, call::run));
    }
}
