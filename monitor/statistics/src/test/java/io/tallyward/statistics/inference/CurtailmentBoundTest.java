package io.tallyward.statistics.inference;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertThrows;
import static org.junit.jupiter.api.Assertions.assertTrue;

import java.util.Random;
import org.junit.jupiter.api.Test;

/** The bound is the inverse of conditional and predictive power, which the reference files check. */
class CurtailmentBoundTest {

    private static final long SEED = 1982;

    /** Of a probability; the bound itself is a closed form, and the power at it is right to 1e-12. */
    private static final double TOLERANCE = 1e-10;

    private static ConditionalPower power(double t, double z, double critical) {
        return ConditionalPower.of(
                t, z, new double[] {1}, new double[] {critical}, new double[] {Double.NEGATIVE_INFINITY});
    }

    @Test
    void isWherePowerHasFallenToTheThreshold() {
        Random random = new Random(SEED);
        for (int i = 0; i < 500; i++) {
            double t = 0.02 + 0.96 * random.nextDouble();
            double critical = 1.5 + 2 * random.nextDouble();
            double drift = 4 * random.nextDouble();
            double threshold = 0.01 + 0.5 * random.nextDouble();
            String where = "seed " + SEED + ", case " + i + ": t " + t + ", critical " + critical + ", drift " + drift;
            double z = CurtailmentBound.conditional(t, critical, drift, threshold);
            assertEquals(threshold, power(t, z, critical).under(drift), TOLERANCE, where);
            double trend = CurtailmentBound.underTrend(t, critical, threshold);
            assertEquals(threshold, power(t, trend, critical).underTrend(), TOLERANCE, where);
            double predictive = CurtailmentBound.predictive(t, critical, threshold);
            assertEquals(threshold, power(t, predictive, critical).predictive(), TOLERANCE, where);
        }
    }

    @Test
    void fallsWithTheDriftThatIsHopedFor() {
        assertTrue(CurtailmentBound.conditional(0.5, 2, 3, 0.1) < CurtailmentBound.conditional(0.5, 2, 1, 0.1));
    }

    @Test
    void refusesWhatIsOutOfRange() {
        for (double bad : new double[] {0, 1, -0.5, Double.NaN, Double.POSITIVE_INFINITY}) {
            assertThrows(IllegalArgumentException.class, () -> CurtailmentBound.conditional(bad, 2, 3, 0.1));
            assertThrows(IllegalArgumentException.class, () -> CurtailmentBound.underTrend(bad, 2, 0.1));
            assertThrows(IllegalArgumentException.class, () -> CurtailmentBound.predictive(0.5, 2, bad));
        }
        assertThrows(IllegalArgumentException.class, () -> CurtailmentBound.predictive(0.5, Double.NaN, 0.1));
        assertThrows(IllegalArgumentException.class, () -> CurtailmentBound.conditional(0.5, 2, Double.NaN, 0.1));
    }
}
