package io.tallyward.statistics.boundary;

import static org.junit.jupiter.api.Assertions.assertEquals;

import java.util.Random;
import org.junit.jupiter.api.Test;

/** Against the plain sum of one exponential function for each pair of points. */
class PanelKernelTest {

    private static final long SEED = 144;

    /** Relative. Exponents up to 40 lose five bits in the plain sum itself. */
    private static final double SUM = 2e-14;

    @Test
    void agreesWithThePlainSumForPanelsOfAnyWidth() {
        Random random = new Random(SEED);
        for (int run = 0; run < 200; run++) {
            double deviation = Math.exp(4 * random.nextDouble() - 2);
            Quadrature source = panels(random, deviation);
            Quadrature target = panels(random, deviation);
            double[] masses = new double[source.points().length];
            for (int j = 0; j < masses.length; j++) {
                masses[j] = random.nextDouble() * source.weights()[j];
            }
            double shift = 2 * deviation * (random.nextDouble() - 0.5);
            assertAgrees(source, masses, target, shift, deviation, "seed " + SEED + ", run " + run);
        }
    }

    private static void assertAgrees(
            Quadrature source, double[] masses, Quadrature target, double shift, double deviation, String where) {
        double variance = deviation * deviation;
        double band = Crossing.KERNEL_REACH * deviation;
        PanelKernel kernel = new PanelKernel(source, masses, target.half(), variance);
        double[] sums = new double[target.points().length];
        for (int panel = 0; panel < target.panels(); panel++) {
            kernel.smear(target.middle(panel) - shift, band, sums, panel * Quadrature.POINTS);
        }
        for (int i = 0; i < sums.length; i++) {
            double plain = 0;
            for (int j = 0; j < masses.length; j++) {
                double gap = target.points()[i] - shift - source.points()[j];
                plain += masses[j] * Math.exp(-0.5 * gap * gap / variance);
            }
            // Masses beyond the band add less than this.
            double beyond = masses.length * deviation * Math.exp(-0.5 * Math.pow(Crossing.KERNEL_REACH, 2));
            assertEquals(plain, sums[i], SUM * plain + beyond, where + ", point " + i);
        }
    }

    /** Up to twenty standard deviations, in panels between a twentieth of one and two of them wide. */
    private static Quadrature panels(Random random, double deviation) {
        double from = 10 * deviation * (random.nextDouble() - 1);
        double to = from + 10 * deviation * (0.01 + random.nextDouble());
        return Quadrature.over(from, to, deviation * Math.exp(-3.7 * random.nextDouble()));
    }
}
