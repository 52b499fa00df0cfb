package io.tallyward.engine.plan;

/**
 * The test of each challenger against the control.
 *
 * @param alpha family-wise level over all challengers and, if two-sided, both directions; in (0, 0.5)
 * @param sides one-sided (only a benefit can be found) or two-sided (benefit and harm)
 * @param power probability to find an effect of the smallest size of interest, in (0.5, 1)
 * @param baseline assumed success rate of the control, in (0, 1)
 * @param smallestEffect smallest absolute difference of success rates worth finding; positive
 * @param spending how alpha is spent over the looks
 * @param better which direction is a benefit
 * @param minimumPerCell least number of successes and of failures in each variant before the first look
 */
public record TestPlan(
        double alpha,
        Sides sides,
        double power,
        double baseline,
        double smallestEffect,
        Spending spending,
        Better better,
        int minimumPerCell) {

    /** Five successes and five failures in each variant: common practice for a normal approximation. */
    public static final int DEFAULT_MINIMUM_PER_CELL = 5;

    /** Whether harm is tested beside benefit. */
    public enum Sides {
        ONE,
        TWO
    }

    /** Which direction of the difference (variant minus control) is a benefit. */
    public enum Better {
        HIGHER,
        LOWER
    }

    /** Level of one tail when the comparison as a whole has level {@code comparisonAlpha}. */
    public double tailAlpha(double comparisonAlpha) {
        return sides == Sides.TWO ? comparisonAlpha / 2 : comparisonAlpha;
    }
}
