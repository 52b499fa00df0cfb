package io.tallyward.statistics.proportion;

import io.tallyward.statistics.distribution.Normal;

/**
 * A confidence interval, both ends included.
 *
 * @param lower at most {@code upper}
 * @param upper at least {@code lower}; positive infinity for a ratio of which the counts say next to nothing
 */
public record Interval(double lower, double upper) {

    public Interval {
        if (!(lower <= upper)) {
            throw new IllegalArgumentException("lower, upper: " + lower + ", " + upper + " (expected: in this order)");
        }
    }

    /**
     * How many standard deviations an interval reaches to each side.
     *
     * @param confidence coverage of both sides together, in (0, 1)
     * @throws IllegalArgumentException if it is not
     */
    static double deviations(double confidence) {
        if (!(confidence > 0 && confidence < 1)) {
            throw new IllegalArgumentException("confidence: " + confidence + " (expected: in (0, 1))");
        }
        return Normal.upperQuantile(0.5 * (1 - confidence));
    }

    /**
     * The interval of a positive quantity from the standard error of its natural logarithm; from 0 to infinity where the
     * ends are beyond a double.
     */
    static Interval aroundLogarithm(double value, double standardError, double confidence) {
        double factor = StrictMath.exp(deviations(confidence) * standardError);
        return new Interval(value / factor, value * factor);
    }
}
