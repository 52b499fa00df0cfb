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
    private final double greatestDrift;
    private final double[][] nodes;
    private final double[][] masses;

    private ExitProfile(double[] information, double[] upper, double[] lower, double greatestDrift) {
        this.information = information;
        this.upper = upper;
        this.lower = lower;
        this.greatestDrift = greatestDrift;
        int looks = information.length;
        nodes = new double[looks][];
        masses = new double[looks][];
        ContinuationDensity density = new ContinuationDensity(0);
        for (int k = 0; k < looks; k++) {
            double mean = greatestDrift * StrictMath.sqrt(density.information());
            double reach = ContinuationDensity.TRUNCATION + mean;
            density.approach(information[k], reach, reach);
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
     * @param greatestDrift the largest absolute drift that will be asked for; its mean at the last look must stay within
     *     25 standard deviations
     */
    public static ExitProfile of(double[] information, double[] upper, double[] lower, double greatestDrift) {
        ExitProbabilities.requireLooks(information, upper, lower);
        double mean = greatestDrift * StrictMath.sqrt(information[information.length - 1]);
        if (!(greatestDrift >= 0 && mean <= FARTHEST_MEAN)) {
            throw new IllegalArgumentException("greatestDrift: " + greatestDrift
                    + " (expected: 0 or more, at most 25 over the root of the last information)");
        }
        return new ExitProfile(information.clone(), upper.clone(), lower.clone(), greatestDrift);
    }

    /** The exit probabilities under a drift no larger than the one prepared for, in absolute value. */
    public ExitProbabilities at(double drift) {
        if (!(StrictMath.abs(drift) <= greatestDrift)) {
            throw new IllegalArgumentException("drift: " + drift + " (expected: within " + greatestDrift + " of 0)");
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
                up[k] += mass * Normal.survival(high - from);
                down[k] += mass * Normal.cdf(low - from);
            }
            origin = information[k];
        }
        return new ExitProbabilities(information, up, down);
    }
}
