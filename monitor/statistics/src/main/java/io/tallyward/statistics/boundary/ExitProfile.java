package io.tallyward.statistics.boundary;

import io.tallyward.statistics.distribution.Normal;

/**
 * Exit probabilities for many drifts from a single pass over the looks.
 *
 * <p>The density of a path that is still running changes with the drift only by the factor {@code exp(drift x - drift^2
 * t/2)} (Cameron and Martin 1944), so one pass without drift serves every drift. Immutable; thread-safe. Keeps two doubles
 * per node: some megabytes for hundreds of looks.
 */
public final class ExitProfile {

    /** Beyond this many standard deviations of drift the pass without drift has underflowed where the path goes. */
    private static final double FARTHEST_MEAN = 25;

    private final double[] information;
    private final double[] upper;
    private final double[] lower;
    private final double leastDrift;
    private final double greatestDrift;
    private final double[][] nodes;
    private final double[][] masses;

    private ExitProfile(double[] information, double[] upper, double[] lower, double leastDrift, double greatestDrift) {
        this.information = information;
        this.upper = upper;
        this.lower = lower;
        this.leastDrift = leastDrift;
        this.greatestDrift = greatestDrift;
        int looks = information.length;
        nodes = new double[looks][];
        masses = new double[looks][];
        ContinuationDensity density = new ContinuationDensity(0);
        for (int k = 0; k < looks; k++) {
            double root = StrictMath.sqrt(density.information());
            double below = ContinuationDensity.TRUNCATION - StrictMath.min(leastDrift, 0) * root;
            double above = ContinuationDensity.TRUNCATION + StrictMath.max(greatestDrift, 0) * root;
            density.approach(information[k], below, above);
            nodes[k] = density.nodes();
            masses[k] = density.masses();
            density.stop(information[k], lower[k], upper[k]);
        }
    }

    /**
     * Prepares a profile.
     *
     * @param information information of each look relative to the planned maximum, ascending
     * @param upper upper boundary of each look for z; positive infinity for none
     * @param lower lower boundary of each look for z; negative infinity for none
     * @param leastDrift the least drift that will be asked for
     * @param greatestDrift the greatest drift that will be asked for; under neither may the mean at the last look be more
     *     than 25 standard deviations from 0
     */
    public static ExitProfile of(
            double[] information, double[] upper, double[] lower, double leastDrift, double greatestDrift) {
        ExitProbabilities.requireLooks(information, upper, lower);
        double farthest = FARTHEST_MEAN / StrictMath.sqrt(information[information.length - 1]);
        if (!(leastDrift >= -farthest && leastDrift <= greatestDrift && greatestDrift <= farthest)) {
            throw new IllegalArgumentException("leastDrift, greatestDrift: " + leastDrift + ", " + greatestDrift
                    + " (expected: ascending, within " + farthest + " of 0)");
        }
        return new ExitProfile(information.clone(), upper.clone(), lower.clone(), leastDrift, greatestDrift);
    }

    /** The exit probabilities under a drift within the range prepared for. */
    public ExitProbabilities at(double drift) {
        if (!(drift >= leastDrift && drift <= greatestDrift)) {
            throw new IllegalArgumentException(
                    "drift: " + drift + " (expected: in [" + leastDrift + ", " + greatestDrift + "])");
        }
        int looks = information.length;
        double[] up = new double[looks];
        double[] down = new double[looks];
        double origin = 0;
        for (int k = 0; k < looks; k++) {
            double step = information[k] - origin;
            double root = StrictMath.sqrt(step);
            double high = (upper[k] * StrictMath.sqrt(information[k]) - drift * step) / root;
            double low = (lower[k] * StrictMath.sqrt(information[k]) - drift * step) / root;
            double offset = -0.5 * drift * drift * origin;
            for (int j = 0; j < nodes[k].length; j++) {
                double from = nodes[k][j] / root;
                double mass = masses[k][j] * StrictMath.exp(drift * nodes[k][j] + offset);
                if (upper[k] < Double.POSITIVE_INFINITY) {
                    up[k] += mass * Normal.survival(high - from);
                }
                if (lower[k] > Double.NEGATIVE_INFINITY) {
                    down[k] += mass * Normal.cdf(low - from);
                }
            }
            origin = information[k];
        }
        return new ExitProbabilities(information, up, down);
    }
}
