package io.tallyward.statistics.split;

import org.apache.commons.math3.special.Gamma;

/**
 * Pearson's goodness of fit of counts to planned shares, without continuity correction: Pearson, Philosophical Magazine
 * 50 (1900) 157-175. Valid for a single reading.
 *
 * @param chiSquare the statistic
 * @param degreesOfFreedom cells minus one; 0 before there are counts
 * @param pValue upper tail of the chi-square law; 1 before there are counts
 */
public record PearsonSplit(double chiSquare, int degreesOfFreedom, double pValue) {

    /** The neutral element of {@link #plus}: nothing counted yet. */
    public static final PearsonSplit NONE = new PearsonSplit(0, 0, 1);

    private static final double ACCURACY = 1e-15;
    private static final int MOST_TERMS = 100_000;

    /**
     * Compares.
     *
     * @param shares planned shares, positive, in any unit
     * @param counts what arrived, as many as shares
     */
    public static PearsonSplit of(double[] shares, long[] counts) {
        double[] theta = Shares.normalised(shares, counts);
        double total = Shares.total(counts);
        if (total == 0) {
            return NONE;
        }
        double chiSquare = 0;
        for (int i = 0; i < theta.length; i++) {
            double gap = Math.fma(-theta[i], total, counts[i]);
            chiSquare += gap * gap / (theta[i] * total);
        }
        return of(chiSquare, theta.length - 1);
    }

    /** Adds an independent comparison, such as another allocation epoch: statistics and degrees of freedom add up. */
    public PearsonSplit plus(PearsonSplit other) {
        return of(chiSquare + other.chiSquare, degreesOfFreedom + other.degreesOfFreedom);
    }

    private static PearsonSplit of(double chiSquare, int degreesOfFreedom) {
        return degreesOfFreedom == 0
                ? NONE
                : new PearsonSplit(
                        chiSquare,
                        degreesOfFreedom,
                        Gamma.regularizedGammaQ(0.5 * degreesOfFreedom, 0.5 * chiSquare, ACCURACY, MOST_TERMS));
    }
}
