package io.tallyward.statistics.boundary;

/** Where and when a path with a given drift leaves between given boundaries. Immutable. */
public final class ExitProbabilities {

    /** Nodes reach from 0 to the mean, so a mean much farther out would need more of them than there is room for. */
    private static final double FARTHEST_MEAN = 1000;

    private final double[] information;
    private final double[] upper;
    private final double[] lower;

    ExitProbabilities(double[] information, double[] upper, double[] lower) {
        this.information = information;
        this.upper = upper;
        this.lower = lower;
    }

    /**
     * Follows a path through the looks.
     *
     * @param information information of each look relative to the planned maximum, ascending
     * @param upper upper boundary of each look for z; positive infinity for none
     * @param lower lower boundary of each look for z; negative infinity for none
     * @param drift expected z at information 1; the mean at the last look must be within 1000 standard deviations of 0
     */
    public static ExitProbabilities of(double[] information, double[] upper, double[] lower, double drift) {
        requireLooks(information, upper, lower);
        int looks = information.length;
        double farthest = FARTHEST_MEAN / StrictMath.sqrt(information[looks - 1]);
        if (!(drift >= -farthest && drift <= farthest)) {
            throw new IllegalArgumentException(
                    "drift: " + drift + " (expected: in [" + -farthest + ", " + farthest + "])");
        }
        double[] up = new double[looks];
        double[] down = new double[looks];
        ContinuationDensity density = new ContinuationDensity(drift);
        for (int k = 0; k < looks; k++) {
            density.approach(information[k], ContinuationDensity.TRUNCATION, ContinuationDensity.TRUNCATION);
            up[k] = density.above(information[k], upper[k]);
            down[k] = density.below(information[k], lower[k]);
            density.stop(information[k], lower[k], upper[k]);
        }
        return new ExitProbabilities(information.clone(), up, down);
    }

    static void requireLooks(double[] information, double[] upper, double[] lower) {
        int looks = information.length;
        if (looks == 0 || upper.length != looks || lower.length != looks) {
            throw new IllegalArgumentException("information, upper, lower: " + looks + ", " + upper.length + ", "
                    + lower.length + " entries (expected: as many of each, at least one)");
        }
        double last = 0;
        for (int k = 0; k < looks; k++) {
            BoundarySequence.requireGrowth("information[" + k + "]", information[k], last);
            if (!(lower[k] <= upper[k])) {
                throw new IllegalArgumentException(
                        "lower[" + k + "]: " + lower[k] + " (expected: at most upper[" + k + "], " + upper[k] + ")");
            }
            last = information[k];
        }
    }

    /** Probability, for each look, that the path first leaves there, upwards. */
    public double[] upper() {
        return upper.clone();
    }

    /** Probability, for each look, that the path first leaves there, downwards. */
    public double[] lower() {
        return lower.clone();
    }

    /** Probability that the path ever leaves upwards first. */
    public double totalUpper() {
        return sum(upper);
    }

    /** Probability that the path ever leaves downwards first. */
    public double totalLower() {
        return sum(lower);
    }

    /** Expected information when the path leaves or, failing that, at the last look. */
    public double expectedInformation() {
        double running = 1;
        double expected = 0;
        for (int k = 0; k < information.length - 1; k++) {
            double leaves = upper[k] + lower[k];
            expected += information[k] * leaves;
            running -= leaves;
        }
        return expected + information[information.length - 1] * StrictMath.max(running, 0);
    }

    private static double sum(double[] terms) {
        double sum = 0;
        for (double term : terms) {
            sum += term;
        }
        return sum;
    }
}
