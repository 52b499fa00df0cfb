package io.tallyward.statistics.split;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertThrows;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.statistics.ReferenceTable;
import java.util.Random;
import org.junit.jupiter.api.Test;

class SequentialSplitTestTest {

    /** Absolute for small values, relative for large; 13 to 15 digits are printed in the reference. */
    private static final double LOG_BAYES_FACTOR = 1e-10;

    /** A product of a hundred factors. */
    private static final double PRODUCT = 1e-11;

    private static final long SEED = 2022;

    @Test
    void agreesWithSixtyDigitArithmetic() {
        ReferenceTable.read("srm_sequential.csv").rows().forEach(row -> {
            double expected = row.number("log_bayes_factor");
            double found = SequentialSplitTest.logBayesFactor(
                    row.number("concentration"), row.numbers("ratio"), row.counts("cumulative_counts"));
            String where = row.text("sequence_id") + " step " + row.text("step");
            assertEquals(expected, found, LOG_BAYES_FACTOR * Math.max(1, Math.abs(expected)), where);
        });
    }

    /** The Bayes factor is a product of predictive probabilities, one unit at a time: an independent way to it. */
    @Test
    void isTheProductOfItsPredictions() {
        Random random = new Random(SEED);
        for (int run = 0; run < 200; run++) {
            double[] shares = {0.5, 0.2, 0.3};
            double concentration = Math.exp(12 * random.nextDouble() - 4);
            long[] counts = new long[3];
            double log = 0;
            for (int n = 0; n < 100; n++) {
                int next = random.nextInt(3);
                double predicted = (concentration * shares[next] + counts[next]) / (concentration + n);
                log += Math.log(predicted / shares[next]);
                counts[next]++;
            }
            double found = SequentialSplitTest.logBayesFactor(concentration, shares, counts);
            assertEquals(log, found, PRODUCT * Math.max(1, Math.abs(log)), "seed " + SEED + ", run " + run);
        }
    }

    /** Averaged over every outcome under the planned split it is 1: what makes reading it at any time safe. */
    @Test
    void averagesToOneUnderThePlannedSplit() {
        double[] shares = {0.1, 0.9};
        int trials = 30;
        double mean = 0;
        double choose = 1;
        for (int k = 0; k <= trials; k++) {
            double probability = choose * Math.pow(0.1, k) * Math.pow(0.9, trials - k);
            mean += probability * Math.exp(SequentialSplitTest.logBayesFactor(20, shares, new long[] {k, trials - k}));
            choose = choose * (trials - k) / (k + 1);
        }
        assertEquals(1, mean, PRODUCT);
    }

    @Test
    void speaksAgainstTheSplitOnlyWhenItIsOff() {
        double[] even = {1, 1};
        assertEquals(0, SequentialSplitTest.logBayesFactor(100, even, new long[] {0, 0}));
        assertTrue(SequentialSplitTest.logBayesFactor(100, even, new long[] {50_100, 49_900}) < 0);
        assertTrue(SequentialSplitTest.logBayesFactor(100, even, new long[] {52_000, 48_000}) > 50);
    }

    @Test
    void staysFiniteAtTheExtremes() {
        double[] lopsided = {1e-6, 1};
        for (double concentration : new double[] {1e-9, 1, 1e9}) {
            double none =
                    SequentialSplitTest.logBayesFactor(concentration, lopsided, new long[] {0, 1_000_000_000_000L});
            double all =
                    SequentialSplitTest.logBayesFactor(concentration, lopsided, new long[] {1_000_000_000_000L, 0});
            assertTrue(Double.isFinite(none) && Double.isFinite(all) && all > none, "concentration " + concentration);
        }
    }

    /** In the neighbourhood of the planned split the normal approximation holds to a part in a million of trillions. */
    @Test
    void agreesWithItsNormalApproximationForTrillions() {
        double concentration = 1000;
        long n = 1_000_000_000_000L;
        long gap = 1_500_001;
        double found = SequentialSplitTest.logBayesFactor(
                concentration, new double[] {1, 1}, new long[] {n / 2 + gap, n / 2 - gap});
        double chiSquare = 4.0 * gap * gap / n;
        double approximation = chiSquare / 2 + 0.5 * Math.log(concentration / (n + concentration));
        assertEquals(approximation, found, 1e-3);
    }

    @Test
    void refusesAConcentrationThatIsNone() {
        for (double concentration : new double[] {0, -1, Double.NaN, Double.POSITIVE_INFINITY}) {
            assertThrows(
                    IllegalArgumentException.class,
                    () -> SequentialSplitTest.logBayesFactor(concentration, new double[] {1, 1}, new long[] {1, 1}));
        }
    }
}
