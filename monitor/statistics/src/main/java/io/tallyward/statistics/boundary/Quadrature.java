package io.tallyward.statistics.boundary;

import org.apache.commons.math3.analysis.integration.gauss.GaussIntegrator;
import org.apache.commons.math3.analysis.integration.gauss.GaussIntegratorFactory;

/**
 * A composite Gauss-Legendre rule on panels of equal width.
 *
 * @param from where the first panel begins
 * @param half half the width of a panel
 * @param points ascending, {@link #POINTS} to a panel
 * @param weights one per point
 */
record Quadrature(double from, double half, double[] points, double[] weights) {

    /**
     * Twelve points for every two standard deviations of the narrower neighbouring kernel. Boundaries then agree with
     * rules of sixteen and twenty points, which the reference files used, to 6e-14 in z over up to 168 looks.
     */
    static final int POINTS = 12;

    private static final double PANEL_WIDTH = 2;

    private static final double[] ABSCISSAE = new double[POINTS];
    private static final double[] COEFFICIENTS = new double[POINTS];

    static {
        GaussIntegrator rule = new GaussIntegratorFactory().legendre(POINTS);
        for (int i = 0; i < POINTS; i++) {
            ABSCISSAE[i] = rule.getPoint(i);
            COEFFICIENTS[i] = rule.getWeight(i);
        }
    }

    /** The rule over [from, to], fit for kernels of standard deviation {@code finest}; empty if the interval is. */
    static Quadrature over(double from, double to, double finest) {
        if (!(from < to)) {
            return new Quadrature(from, 1, new double[0], new double[0]);
        }
        int panels = (int) StrictMath.max(1, StrictMath.ceil((to - from) / (PANEL_WIDTH * finest)));
        double half = 0.5 * (to - from) / panels;
        double[] points = new double[panels * POINTS];
        double[] weights = new double[panels * POINTS];
        for (int panel = 0; panel < panels; panel++) {
            double middle = from + (2 * panel + 1) * half;
            for (int i = 0; i < POINTS; i++) {
                points[panel * POINTS + i] = middle + half * ABSCISSAE[i];
                weights[panel * POINTS + i] = half * COEFFICIENTS[i];
            }
        }
        return new Quadrature(from, half, points, weights);
    }

    /** The position of a point within its panel, from -1 to 1; those of mirrored points differ in sign only. */
    static double abscissa(int point) {
        return ABSCISSAE[point];
    }

    int panels() {
        return points.length / POINTS;
    }

    double middle(int panel) {
        return from + (2 * panel + 1) * half;
    }
}
