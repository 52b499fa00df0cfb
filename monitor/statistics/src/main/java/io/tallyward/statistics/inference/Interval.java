package io.tallyward.statistics.inference;

import java.util.function.DoubleUnaryOperator;

/**
 * A confidence interval, on the scale its maker names.
 *
 * @param lower negative infinity if open below
 * @param upper positive infinity if open above
 * @param level the probability, before the data, that the interval will hold the true value; in (0, 1)
 */
public record Interval(double lower, double upper, double level) {

    public Interval {
        if (!(lower <= upper)) {
            throw new IllegalArgumentException("lower: " + lower + " (expected: at most the upper end " + upper + ")");
        }
        requireLevel(level);
    }

    /** Whether a value lies inside, the ends included. */
    public boolean contains(double value) {
        return value >= lower && value <= upper;
    }

    /** The interval after an ascending change of scale. */
    Interval map(DoubleUnaryOperator ascending) {
        return new Interval(ascending.applyAsDouble(lower), ascending.applyAsDouble(upper), level);
    }

    static void requireLevel(double level) {
        if (!(level > 0 && level < 1)) {
            throw new IllegalArgumentException("level: " + level + " (expected: in (0, 1))");
        }
    }
}
