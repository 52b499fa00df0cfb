package io.tallyward.statistics.inference;

/**
 * A point estimate with its confidence interval, both on the scale their maker names.
 *
 * @param value the point estimate; finite
 * @param interval the interval around it
 */
public record Estimate(double value, Interval interval) {

    public Estimate {
        if (!Double.isFinite(value)) {
            throw new IllegalArgumentException("value: " + value + " (expected: finite)");
        }
    }
}
