package io.tallyward.statistics.proportion;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertTrue;

import java.util.ArrayList;
import java.util.List;
import java.util.function.BiFunction;
import java.util.function.Function;
import org.apache.commons.math3.distribution.BinomialDistribution;
import org.junit.jupiter.api.Test;

/**
 * How often intervals of level 0.95 hold the truth: no simulation, all outcomes of the binomial laws are weighed. Means are
 * over rates on a grid, as the coverage at a single rate jumps with it.
 */
class IntervalCoverageTest {

    private static final double LEVEL = 0.95;

    /** What is promised of the mean coverage of the score intervals. */
    private static final double ONE_POINT = 0.01;

    /** Figures are stated with four decimals. */
    private static final double STATED = 5e-5;

    private static final double NEGLIGIBLE = 1e-12;

    /** Trials, mean and least coverage of Wilson's interval and of the textbook one, over rates 0.005, 0.010 ... 0.995. */
    private static final double[][] ONE_RATE = {
        {10, 0.9536, 0.8597, 0.7731, 0.0489},
        {20, 0.9533, 0.9046, 0.8506, 0.0954},
        {30, 0.9519, 0.8604, 0.8793, 0.1396},
        {60, 0.9516, 0.9343, 0.9116, 0.2597},
        {100, 0.9496, 0.9102, 0.9258, 0.3941},
        {200, 0.9499, 0.9202, 0.9371, 0.6325}
    };

    /** Trials of both arms, then mean and least coverage of Newcombe, Miettinen and Nurminen, Wald. */
    private static final double[][] DIFFERENCE = {
        {10, 10, 0.9541, 0.9071, 0.9590, 0.9118, 0.8954, 0.3965},
        {20, 20, 0.9529, 0.9214, 0.9514, 0.9221, 0.9252, 0.6354},
        {60, 60, 0.9515, 0.9200, 0.9506, 0.9416, 0.9427, 0.8013},
        {100, 100, 0.9503, 0.9345, 0.9505, 0.9416, 0.9451, 0.8737},
        {20, 60, 0.9522, 0.9336, 0.9544, 0.9356, 0.9251, 0.6641},
        {30, 150, 0.9517, 0.9420, 0.9532, 0.9475, 0.9283, 0.7564}
    };

    @Test
    void wilsonsIntervalHoldsARateAsOftenAsItSays() {
        for (double[] stated : ONE_RATE) {
            int n = (int) stated[0];
            double[] wilson = ofRate(n, x -> ScoreInterval.wilson(x, n, LEVEL).orElseThrow());
            double[] wald = ofRate(n, x -> wald(x, n));
            String where = "trials " + n;
            assertEquals(LEVEL, wilson[0], ONE_POINT, where);
            assertEquals(stated[1], wilson[0], STATED, where);
            assertEquals(stated[2], wilson[1], STATED, where);
            assertEquals(stated[3], wald[0], STATED, where);
            assertEquals(stated[4], wald[1], STATED, where);
        }
    }

    @Test
    void scoreIntervalsHoldADifferenceAsOftenAsTheySay() {
        List<Function<Stratum, Interval>> methods = List.of(
                counts -> ScoreInterval.newcombe(counts, LEVEL).orElseThrow(),
                counts -> ScoreInterval.miettinenNurminen(counts, LEVEL).orElseThrow(),
                counts -> RateDifference.of(counts).orElseThrow().wald(LEVEL));
        for (double[] stated : DIFFERENCE) {
            for (int method = 0; method < methods.size(); method++) {
                Function<Stratum, Interval> interval = methods.get(method);
                int n1 = (int) stated[0];
                int n0 = (int) stated[1];
                double[] found = ofDifference(n1, n0, (x1, x0) -> interval.apply(new Stratum(x1, n1, x0, n0)));
                String where = "trials " + n1 + ", " + n0 + ", method " + method;
                assertEquals(stated[2 + 2 * method], found[0], STATED, where);
                assertEquals(stated[3 + 2 * method], found[1], STATED, where);
                assertTrue(method == 2 || Math.abs(found[0] - LEVEL) <= ONE_POINT, where);
            }
        }
    }

    private static Interval wald(int x, int n) {
        double rate = (double) x / n;
        double reach = Interval.deviations(LEVEL) * Math.sqrt(rate * (1 - rate) / n);
        return new Interval(rate - reach, rate + reach);
    }

    /** Mean and least coverage. */
    private static double[] ofRate(int n, Function<Integer, Interval> interval) {
        List<Interval> intervals = new ArrayList<>();
        for (int x = 0; x <= n; x++) {
            intervals.add(interval.apply(x));
        }
        double sum = 0;
        double least = 1;
        for (int i = 1; i < 200; i++) {
            double rate = i / 200.0;
            double[] mass = mass(n, rate);
            double held = 0;
            for (int x = 0; x <= n; x++) {
                held += holds(intervals.get(x), rate) ? mass[x] : 0;
            }
            sum += held;
            least = Math.min(least, held);
        }
        return new double[] {sum / 199, least};
    }

    private static double[] ofDifference(int n1, int n0, BiFunction<Integer, Integer, Interval> interval) {
        Interval[][] intervals = new Interval[n1 + 1][n0 + 1];
        for (int x1 = 0; x1 <= n1; x1++) {
            for (int x0 = 0; x0 <= n0; x0++) {
                intervals[x1][x0] = interval.apply(x1, x0);
            }
        }
        double sum = 0;
        double least = 1;
        for (int i = 1; i < 40; i += 2) {
            for (int j = 1; j < 40; j += 2) {
                double held = held(intervals, mass(n1, i / 40.0), mass(n0, j / 40.0), (i - j) / 40.0);
                sum += held;
                least = Math.min(least, held);
            }
        }
        return new double[] {sum / 400, least};
    }

    private static double held(Interval[][] intervals, double[] variant, double[] control, double difference) {
        double held = 0;
        for (int x1 = 0; x1 < variant.length; x1++) {
            for (int x0 = 0; x0 < control.length && variant[x1] > NEGLIGIBLE; x0++) {
                held += holds(intervals[x1][x0], difference) ? variant[x1] * control[x0] : 0;
            }
        }
        return held;
    }

    private static boolean holds(Interval interval, double value) {
        return interval.lower() <= value && value <= interval.upper();
    }

    private static double[] mass(int n, double rate) {
        BinomialDistribution law = new BinomialDistribution(null, n, rate);
        double[] mass = new double[n + 1];
        for (int x = 0; x <= n; x++) {
            mass[x] = law.probability(x);
        }
        return mass;
    }
}
