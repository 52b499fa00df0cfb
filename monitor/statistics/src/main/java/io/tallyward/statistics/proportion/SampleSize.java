package io.tallyward.statistics.proportion;

/**
 * How many trials it takes to gather a given information about a difference of two rates.
 *
 * @param maximumInformation the information to gather, 1 / (squared standard error of the difference)
 * @param pooledRate success rate of both arms pooled if the effect is the smallest one sought
 * @param population trials of the whole experiment, other variants included; not rounded
 * @param controlTrials trials of the control, rounded up
 * @param variantTrials trials of the variant, rounded up
 */
public record SampleSize(
        double maximumInformation, double pooledRate, double population, long controlTrials, long variantTrials) {

    /**
     * The size for a given information.
     *
     * @param maximumInformation the information to gather; positive
     * @param baseline success rate of the control, in (0, 1)
     * @param smallestEffect smallest difference sought, variant minus control; not 0, negative if a lower rate is
     *     sought; {@code baseline + smallestEffect} lies in (0, 1)
     * @param controlShare share of the whole population that goes to the control, in (0, 1)
     * @param variantShare share of the whole population that goes to the variant, in (0, 1)
     */
    public static SampleSize of(
            double maximumInformation,
            double baseline,
            double smallestEffect,
            double controlShare,
            double variantShare) {
        if (!(maximumInformation > 0 && maximumInformation < Double.POSITIVE_INFINITY)) {
            throw new IllegalArgumentException(
                    "maximumInformation: " + maximumInformation + " (expected: positive and finite)");
        }
        double improved = baseline + smallestEffect;
        requireInside("baseline", baseline);
        requireInside("baseline + smallestEffect", improved);
        requireInside("controlShare", controlShare);
        requireInside("variantShare", variantShare);
        double pooled = (controlShare * baseline + variantShare * improved) / (controlShare + variantShare);
        double population = maximumInformation * pooled * (1 - pooled) * (1 / variantShare + 1 / controlShare);
        return new SampleSize(
                maximumInformation, pooled, population, (long) StrictMath.ceil(population * controlShare), (long)
                        StrictMath.ceil(population * variantShare));
    }

    /**
     * The information at which an effect is found with the power of a design.
     *
     * @param drift expected z at the planned maximum of information; positive
     * @param smallestEffect smallest difference sought; not 0
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
        return ratio * ratio;
    }

    private static void requireInside(String name, double rate) {
        if (!(rate > 0 && rate < 1)) {
            throw new IllegalArgumentException(name + ": " + rate + " (expected: in (0, 1))");
        }
    }
}
