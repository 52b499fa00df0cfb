package io.tallyward.statistics.proportion;

/**
 * How many trials it takes to gather a given information about a difference of two rates. With shares {@code s1, s0} of a
 * population N and the rate {@code p} of both arms pooled under the smallest effect, {@code information = N / (p (1 - p)
 * (1/s1 + 1/s0))}; solved for N. For equal shares and a single look this is the textbook's {@code 2 p (1 - p) (z_alpha +
 * z_beta)^2 / effect^2} per arm. Relative error below 1e-15, before rounding up.
 *
 * <p>The baseline is a guess; the test is not. Looks and boundaries follow the information that is observed, so a wrong
 * baseline costs time, not validity.
 *
 * @param maximumInformation the information to gather, 1 / (squared standard error of the difference)
 * @param pooledRate success rate of both arms pooled if the effect is the smallest one sought
 * @param population trials of the whole experiment, other variants included; not rounded
 * @param controlTrials trials of the control, rounded up
 * @param variantTrials trials of the variant, rounded up
 */
public record SampleSize(
        double maximumInformation, double pooledRate, double population, long controlTrials, long variantTrials) {

    /** Every count up to here is a double. */
    private static final double MOST = 1L << 53;

    /** What shares may add up to beyond 1: thirds are rounded. */
    private static final double SLACK = 1e-12;

    public SampleSize {
        if (!(maximumInformation > 0 && maximumInformation < Double.POSITIVE_INFINITY)) {
            throw new IllegalArgumentException(
                    "maximumInformation: " + maximumInformation + " (expected: positive and finite)");
        }
        if (!(pooledRate >= 0 && pooledRate <= 1)) {
            throw new IllegalArgumentException("pooledRate: " + pooledRate + " (expected: in [0, 1])");
        }
        if (!(population >= 0 && population <= MOST)) {
            throw new IllegalArgumentException("population: " + population + " (expected: in [0, 2^53])");
        }
        if (!(controlTrials >= 0 && variantTrials >= 0)) {
            throw new IllegalArgumentException(
                    "controlTrials, variantTrials: " + controlTrials + ", " + variantTrials + " (expected: 0 or more)");
        }
    }

    /**
     * The size for a given information.
     *
     * @param maximumInformation the information to gather; positive
     * @param baseline success rate of the control, in (0, 1)
     * @param smallestEffect smallest difference sought, variant minus control; not 0, negative if a lower rate is
     *     sought; {@code baseline + smallestEffect} lies in (0, 1)
     * @param controlShare share of the whole population that goes to the control, in (0, 1)
     * @param variantShare share of the whole population that goes to the variant, in (0, 1); together at most 1
     * @throws IllegalArgumentException also if more than 2^53 trials are needed
     */
    public static SampleSize of(
            double maximumInformation,
            double baseline,
            double smallestEffect,
            double controlShare,
            double variantShare) {
        double improved = baseline + smallestEffect;
        requireInside("baseline", baseline);
        requireInside("baseline + smallestEffect", improved);
        requireShares(controlShare, variantShare);
        double pooled = (controlShare * baseline + variantShare * improved) / (controlShare + variantShare);
        double variance = pooled * (1 - pooled) * (1 / variantShare + 1 / controlShare);
        return sized(maximumInformation, pooled, maximumInformation * variance, controlShare, variantShare);
    }

    /**
     * What a relative effect comes to at a baseline: {@code baseline relativeEffect}, a difference of rates.
     *
     * @param baseline success rate of the control, in (0, 1)
     * @param relativeEffect change relative to it, 0.05 for a rise by a twentieth, negative for a fall; {@code baseline (1 +
     *     relativeEffect)} lies in (0, 1)
     */
    public static double absoluteEffect(double baseline, double relativeEffect) {
        requireInside("baseline", baseline);
        double effect = baseline * relativeEffect;
        if (!(baseline + effect > 0 && baseline + effect < 1)) {
            throw new IllegalArgumentException(
                    "relativeEffect: " + relativeEffect + " (expected: to take " + baseline + " to a rate in (0, 1))");
        }
        return effect;
    }

    /**
     * The information at which an effect is found with the power of a design: {@code (drift / smallestEffect)^2}.
     *
     * @param drift expected z at the planned maximum of information; positive
     * @param smallestEffect smallest difference sought, in (-1, 1); not 0
     * @throws IllegalArgumentException also if the answer is beyond the range of a double
     */
    public static double maximumInformation(double drift, double smallestEffect) {
        if (!(drift > 0 && drift < Double.POSITIVE_INFINITY)) {
            throw new IllegalArgumentException("drift: " + drift + " (expected: positive and finite)");
        }
        if (!(StrictMath.abs(smallestEffect) > 0 && StrictMath.abs(smallestEffect) < 1)) {
            throw new IllegalArgumentException(
                    "smallestEffect: " + smallestEffect + " (expected: in (-1, 1) and not 0)");
        }
        double ratio = drift / smallestEffect;
        double information = ratio * ratio;
        if (!(information > 0 && information < Double.POSITIVE_INFINITY)) {
            throw new IllegalArgumentException(
                    "drift / smallestEffect: " + ratio + " (expected: with a square that is positive and finite)");
        }
        return information;
    }

    static SampleSize sized(
            double maximumInformation, double pooled, double population, double controlShare, double variantShare) {
        if (!(maximumInformation > 0 && population <= MOST)) {
            throw new IllegalArgumentException("maximumInformation: " + maximumInformation
                    + " (expected: positive, and gathered by at most 2^53 trials, not " + population + ")");
        }
        return new SampleSize(
                maximumInformation, pooled, population, (long) StrictMath.ceil(population * controlShare), (long)
                        StrictMath.ceil(population * variantShare));
    }

    static void requireShares(double controlShare, double variantShare) {
        requireInside("controlShare", controlShare);
        requireInside("variantShare", variantShare);
        if (!(controlShare + variantShare <= 1 + SLACK)) {
            throw new IllegalArgumentException(
                    "controlShare + variantShare: " + (controlShare + variantShare) + " (expected: at most 1)");
        }
    }

    static void requireInside(String name, double rate) {
        if (!(rate > 0 && rate < 1)) {
            throw new IllegalArgumentException(name + ": " + rate + " (expected: in (0, 1))");
        }
    }
}
