package io.tallyward.statistics.distribution;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertThrows;

import io.tallyward.statistics.ReferenceTable;
import java.util.List;
import java.util.Random;
import java.util.function.DoubleUnaryOperator;
import org.junit.jupiter.api.Test;

class NormalTest {

    /** Relative; a few units in the last place, and exp(-x^2/2) cannot do better than its argument's rounding. */
    private static final double TAIL = 5e-15;

    /** Relative; the quantile's condition number in the tail is below 1, so only its own rounding is left. */
    private static final double QUANTILE = 1e-15;

    private static final long SEED = 20260504;

    @Test
    void agreesWithSixtyDigitArithmeticInBothTails() {
        ReferenceTable.read("normal.csv").rows().forEach(row -> {
            double x = row.number("x");
            assertClose(row.number("log_survival"), Normal.logSurvival(x), TAIL, "log survival at " + x);
            if (row.has("density")) {
                assertClose(row.number("density"), Normal.density(x), TAIL, "density at " + x);
                assertClose(row.number("cdf"), Normal.cdf(x), TAIL, "cdf at " + x);
                assertClose(row.number("survival"), Normal.survival(x), TAIL, "survival at " + x);
                // The ratio is the same from either side of 0.
                double ratio = Math.min(row.number("cdf"), row.number("survival")) / row.number("density");
                assertClose(ratio, Normal.millsRatio(Math.abs(x)), TAIL, "Mills' ratio at " + x);
            }
        });
    }

    @Test
    void invertsTailsDownToTheSmallestProbabilities() {
        ReferenceTable.read("normal_quantiles.csv").rows().forEach(row -> {
            double p = row.number("p");
            double expected = row.number("upper_quantile");
            assertEquals(expected, Normal.upperQuantile(p), QUANTILE * Math.max(1, Math.abs(expected)), "at " + p);
            assertEquals(-Normal.upperQuantile(p), Normal.quantile(p));
        });
    }

    @Test
    void returnsToTheProbabilityItWasGiven() {
        Random random = new Random(SEED);
        for (int i = 0; i < 2000; i++) {
            double logP = -660 * random.nextDouble();
            double p = Math.exp(logP) / 2;
            double x = Normal.upperQuantile(p);
            // An error of one unit in the last place of x moves log p by x^2 units.
            double tolerance = 4 * Math.ulp(1.0) * (10 + x * x);
            assertEquals(Math.log(p), Normal.logSurvival(x), tolerance * 10, "seed " + SEED + ", p " + p);
        }
    }

    @Test
    void reachesTheEndsOfTheRealLine() {
        assertEquals(0, Normal.survival(Double.POSITIVE_INFINITY));
        assertEquals(1, Normal.survival(Double.NEGATIVE_INFINITY));
        assertEquals(0, Normal.density(Double.NEGATIVE_INFINITY));
        assertEquals(Double.POSITIVE_INFINITY, Normal.upperQuantile(0));
        assertEquals(Double.NEGATIVE_INFINITY, Normal.upperQuantile(1));
    }

    @Test
    void refusesWhatIsNoNumber() {
        List<DoubleUnaryOperator> functions =
                List.of(Normal::density, Normal::cdf, Normal::survival, Normal::logSurvival);
        for (DoubleUnaryOperator function : functions) {
            String message = assertThrows(IllegalArgumentException.class, () -> function.applyAsDouble(Double.NaN))
                    .getMessage();
            assertEquals("x: NaN (expected: a number or an infinity)", message);
        }
    }

    @Test
    void refusesWhatIsNoProbability() {
        for (double p : new double[] {-1e-300, 1.0000001, Double.NaN}) {
            assertThrows(IllegalArgumentException.class, () -> Normal.upperQuantile(p));
        }
    }

    private static void assertClose(double expected, double actual, double relative, String what) {
        assertEquals(expected, actual, relative * Math.abs(expected), what);
    }
}
