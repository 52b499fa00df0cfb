package io.tallyward.statistics.proportion;

/**
 * How much worse than the control a variant may be before it counts as worse: the difference of rates, variant minus
 * control, that a test of non-inferiority has to rule out. The sign says which direction is the harm: a negative one
 * guards a rate that should not fall, a positive one a rate that should not rise.
 *
 * @param nullDifference the least harmful difference that is not acceptable any more, in (-1, 1) and not 0
 */
public record Margin(double nullDifference) {

    public Margin {
        if (!(StrictMath.abs(nullDifference) >= Double.MIN_NORMAL && StrictMath.abs(nullDifference) < 1)) {
            throw new IllegalArgumentException(
                    "nullDifference: " + nullDifference + " (expected: in (-1, 1) and not 0)");
        }
    }

    /**
     * The variant's rate may be lower, by less than this: for a measure of which more is better.
     *
     * @param width a difference of rates, in (0, 1)
     */
    public static Margin below(double width) {
        return new Margin(-requireWidth(width));
    }

    /**
     * The variant's rate may be higher, by less than this: for a measure of which less is better.
     *
     * @param width a difference of rates, in (0, 1)
     */
    public static Margin above(double width) {
        return new Margin(requireWidth(width));
    }

    /**
     * A margin relative to the control's rate: {@code nullDifference = baseline change}. The product is fixed when the plan
     * is made; it does not follow the rate that is observed, so that the question does not change with the data.
     *
     * @param baseline planned success rate of the control, in (0, 1)
     * @param change acceptable change of it, -0.02 for a fall by a fiftieth; {@code baseline (1 + change)} lies in (0, 1)
     */
    public static Margin relative(double baseline, double change) {
        return new Margin(SampleSize.absoluteEffect(baseline, change));
    }

    /** Whether a fall of the rate is the harm that is guarded against; otherwise a rise. */
    public boolean guardsAgainstFall() {
        return nullDifference < 0;
    }

    /**
     * How far a difference is inside the margin, in the direction that is acceptable; negative outside.
     *
     * @param difference variant minus control, in [-1, 1]
     */
    public double distance(double difference) {
        if (!(difference >= -1 && difference <= 1)) {
            throw new IllegalArgumentException("difference: " + difference + " (expected: in [-1, 1])");
        }
        return guardsAgainstFall() ? difference - nullDifference : nullDifference - difference;
    }

    private static double requireWidth(double width) {
        if (!(width >= Double.MIN_NORMAL && width < 1)) {
            throw new IllegalArgumentException("width: " + width + " (expected: in (0, 1))");
        }
        return width;
    }
}
