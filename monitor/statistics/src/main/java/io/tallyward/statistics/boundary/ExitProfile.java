package io.tallyward.statistics.boundary;

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
            nodes[k] = density.points();
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

    /**
     * A way to leave.
     *
     * @param probability that a path ever leaves this way first
     * @param slope derivative of {@code probability} with respect to the drift
     */
    public record Exit(double probability, double slope) {

        public Exit {
            if (!(StrictMath.abs(probability) < Double.POSITIVE_INFINITY
                    && StrictMath.abs(slope) < Double.POSITIVE_INFINITY)) {
                throw new IllegalArgumentException(
                        "probability, slope: " + probability + ", " + slope + " (expected: finite)");
            }
        }
    }

    /** The exit probabilities under a drift within the range prepared for. */
    public ExitProbabilities at(double drift) {
        requireDrift(drift);
        int looks = information.length;
        double[] up = new double[looks];
        double[] down = new double[looks];
        Crossing crossing = new Crossing();
        for (int k = 0; k < looks; k++) {
            cross(crossing, k, drift, 1);
            up[k] = crossing.tail();
            cross(crossing, k, drift, -1);
            down[k] = crossing.tail();
        }
        return new ExitProbabilities(information, up, down);
    }

    /**
     * All that leaves upwards under a drift within the range prepared for. The slope is the mean of {@code X - drift t}, the
     * score of the drift, over the paths that do, {@code X} being where and {@code t} when.
     */
    public Exit upward(double drift) {
        return exit(drift, 1);
    }

    /** All that leaves downwards; as above. */
    public Exit downward(double drift) {
        return exit(drift, -1);
    }

    private Exit exit(double drift, int side) {
        requireDrift(drift);
        Crossing crossing = new Crossing();
        double probability = 0;
        double slope = 0;
        for (int k = 0; k < information.length; k++) {
            cross(crossing, k, drift, side);
            double origin = origin(k);
            probability += crossing.tail();
            slope += crossing.moment()
                    - drift * origin * crossing.tail()
                    + side * StrictMath.sqrt(information[k] - origin) * crossing.density();
        }
        return new Exit(probability, slope);
    }

    private void requireDrift(double drift) {
        if (!(drift >= leastDrift && drift <= greatestDrift)) {
            throw new IllegalArgumentException(
                    "drift: " + drift + " (expected: in [" + leastDrift + ", " + greatestDrift + "])");
        }
    }

    private double origin(int k) {
        return k == 0 ? 0 : information[k - 1];
    }

    private void cross(Crossing crossing, int k, double drift, int side) {
        double origin = origin(k);
        double step = information[k] - origin;
        double root = StrictMath.sqrt(step);
        double bound = (side > 0 ? upper[k] : lower[k]) * StrictMath.sqrt(information[k]);
        double lean = (StrictMath.abs(bound) / information[k] + StrictMath.abs(drift)) * root;
        crossing.sum(nodes[k], masses[k], bound - drift * step, root, side, lean, drift, -0.5 * drift * drift * origin);
    }
}
