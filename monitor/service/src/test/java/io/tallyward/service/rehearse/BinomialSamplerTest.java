package io.tallyward.service.rehearse;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertThrows;
import static org.junit.jupiter.api.Assertions.assertTrue;

import java.util.ArrayList;
import java.util.List;
import java.util.random.RandomGenerator;
import java.util.random.RandomGeneratorFactory;
import org.apache.commons.math3.distribution.BinomialDistribution;
import org.apache.commons.math3.distribution.ChiSquaredDistribution;
import org.apache.commons.math3.special.Gamma;
import org.junit.jupiter.api.Test;
import org.junit.jupiter.params.ParameterizedTest;
import org.junit.jupiter.params.provider.CsvSource;

/** The oracle is the binomial distribution and the log-gamma function of Apache Commons Math 3.6.1. */
class BinomialSamplerTest {

    private static final int DRAWS = 200_000;

    /** Cells of the chi-square test that expect fewer are put together (common practice). */
    private static final double LEAST_EXPECTED = 10;

    /** A right sampler fails one of these tests in a thousand; the seeds are fixed, so it fails never or always. */
    private static final double LEAST_P = 1e-3;

    @ParameterizedTest
    @CsvSource({
        // inversion, up to and at its limit
        "1, 0.3",
        "5, 0.5",
        "40, 0.02",
        "100, 0.0999",
        "2000, 0.001",
        "1000000, 0.000003",
        "100000000, 0.00000009",
        // rejection, from its limit on
        "20, 0.5",
        "100, 0.1",
        "25, 0.45",
        "300, 0.12",
        "1000, 0.5",
        "10000, 0.001",
        "4882, 0.12",
        "100000, 0.3",
        "1000000, 0.12",
        // mirrored
        "40, 0.98",
        "1000, 0.93"
    })
    void drawsFromTheDistribution(int trials, double rate) {
        RandomGenerator random = random(trials + Double.hashCode(rate));
        BinomialDistribution oracle = new BinomialDistribution(null, trials, rate);
        List<Integer> ends = cellEnds(oracle);
        long[] observed = new long[ends.size()];
        for (int i = 0; i < DRAWS; i++) {
            observed[cell(ends, BinomialSampler.draw(random, trials, rate))]++;
        }
        double chiSquare = 0;
        double before = 0;
        for (int cell = 0; cell < observed.length; cell++) {
            double until = oracle.cumulativeProbability(ends.get(cell));
            double expected = DRAWS * (until - before);
            chiSquare += (observed[cell] - expected) * (observed[cell] - expected) / expected;
            before = until;
        }
        double p = 1 - new ChiSquaredDistribution(null, observed.length - 1).cumulativeProbability(chiSquare);
        assertTrue(p > LEAST_P && observed.length >= 2, "p " + p + ", " + observed.length + " cells");
    }

    /** Last values of cells that each expect enough draws; the last cell goes up to the number of trials. */
    private static List<Integer> cellEnds(BinomialDistribution oracle) {
        int trials = oracle.getNumberOfTrials();
        List<Integer> ends = new ArrayList<>();
        double before = 0;
        int from = Math.max(0, (int) (oracle.getNumericalMean() - 8 * Math.sqrt(oracle.getNumericalVariance()) - 1));
        int step = Math.max(1, (int) (Math.sqrt(oracle.getNumericalVariance()) / 10));
        for (long value = from; value < trials; value += step) {
            double until = oracle.cumulativeProbability((int) value);
            if (DRAWS * (until - before) >= LEAST_EXPECTED && DRAWS * (1 - until) >= LEAST_EXPECTED) {
                ends.add((int) value);
                before = until;
            } else if (DRAWS * (1 - until) < LEAST_EXPECTED) {
                break;
            }
        }
        ends.add(trials);
        return ends;
    }

    private static int cell(List<Integer> ends, long value) {
        int cell = 0;
        while (ends.get(cell) < value) {
            cell++;
        }
        return cell;
    }

    @Test
    void keepsMeanAndVarianceFromTinyToHugeCounts() {
        RandomGenerator random = random(7);
        int draws = 20_000;
        for (long trials : new long[] {1, 7, 60, 900, 40_000, 5_000_000, 3_000_000_000L, 1_000_000_000_000L}) {
            for (double rate : new double[] {1e-4, 0.003, 0.02, 0.12, 0.37, 0.5, 0.8, 0.999}) {
                double mean = trials * rate;
                double variance = mean * (1 - rate);
                double sum = 0;
                double squares = 0;
                for (int i = 0; i < draws; i++) {
                    long drawn = BinomialSampler.draw(random, trials, rate);
                    assertTrue(drawn >= 0 && drawn <= trials);
                    sum += drawn - mean;
                    squares += (drawn - mean) * (drawn - mean);
                }
                String where = "trials " + trials + ", rate " + rate;
                // Four and a half standard errors of either moment; 64 pairs leave a chance of 1e-3 for any to fail.
                assertEquals(0, sum / draws, 4.5 * Math.sqrt(variance / draws), where);
                double kurtosis = 3 + (1 - 6 * rate * (1 - rate)) / variance;
                assertEquals(variance, squares / draws, 4.5 * variance * Math.sqrt((kurtosis - 1) / draws), where);
            }
        }
    }

    @Test
    void knowsWhatStirlingLeavesOver() {
        for (int k : new int[] {0, 1, 2, 9, 10, 63, 64, 65, 200, 5000}) {
            double stirling = 0.5 * Math.log(2 * Math.PI) + (k + 0.5) * Math.log(k + 1) - (k + 1);
            // The oracle's own rounding: log-gamma of 5000 is 4e4, with relative error 1e-15 or so.
            assertEquals(Gamma.logGamma(k + 1.0) - stirling, BinomialSampler.remainder(k), 1e-13 + 2e-14 * k);
        }
    }

    @Test
    void isCertainAtTheEnds() {
        RandomGenerator random = random(1);
        assertEquals(0, BinomialSampler.draw(random, 0, 0.4));
        assertEquals(0, BinomialSampler.draw(random, 1000, 0));
        assertEquals(1000, BinomialSampler.draw(random, 1000, 1));
    }

    @Test
    void refusesWhatIsNoDistribution() {
        RandomGenerator random = random(1);
        assertThrows(IllegalArgumentException.class, () -> BinomialSampler.draw(random, -1, 0.5));
        assertThrows(IllegalArgumentException.class, () -> BinomialSampler.draw(random, 1, -0.1));
        assertThrows(IllegalArgumentException.class, () -> BinomialSampler.draw(random, 1, 1.1));
        assertThrows(IllegalArgumentException.class, () -> BinomialSampler.draw(random, 1, Double.NaN));
    }

    private static RandomGenerator random(long seed) {
        return RandomGeneratorFactory.of("L64X128MixRandom").create(seed);
    }
}
