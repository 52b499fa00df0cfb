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

    /** From here down the p-value loses digits, then itself. */
    private static final double LEAST = 1e-290;

    private static final double LN_10 = StrictMath.log(10);

    public PearsonSplit {
        if (!(chiSquare >= 0 && chiSquare < Double.POSITIVE_INFINITY)) {
            throw new IllegalArgumentException("chiSquare: " + chiSquare + " (expected: 0 or more, finite)");
        }
        if (!(degreesOfFreedom >= 0)) {
            throw new IllegalArgumentException("degreesOfFreedom: " + degreesOfFreedom + " (expected: 0 or more)");
        }
        if (!(pValue >= 0 && pValue <= 1)) {
            throw new IllegalArgumentException("pValue: " + pValue + " (expected: in [0, 1])");
        }
    }

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

    /**
     * The decimal logarithm of {@link #pValue}, which itself is 0 below 1e-308 or so; never underflows. Absolute error below
     * 1e-13, relative below 1e-14 for large statistics. The tail beyond the reach of a double is the continued fraction of
     * the incomplete gamma function, Abramowitz and Stegun (1964) 6.5.31.
     */
    public double log10PValue() {
        if (pValue > LEAST) {
            return StrictMath.log10(pValue);
        }
        double a = 0.5 * degreesOfFreedom;
        double x = 0.5 * chiSquare;
        // Lentz's evaluation; terms fall off at once, as x is hundreds here
        double b = x + 1 - a;
        double d = 1 / b;
        double c = 1 / Double.MIN_NORMAL;
        double fraction = d;
        for (int i = 1; i <= MOST_TERMS; i++) {
            double an = -i * (i - a);
            b += 2;
            d = 1 / (b + an * d);
            c = b + an / c;
            fraction *= c * d;
            if (StrictMath.abs(c * d - 1) <= ACCURACY) {
                break;
            }
        }
        return (a * StrictMath.log(x) - x - Gamma.logGamma(a) + StrictMath.log(fraction)) / LN_10;
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
