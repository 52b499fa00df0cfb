package io.tallyward.service.config.document;

/**
 * A range of numbers.
 *
 * @param low lower end
 * @param withLow whether the lower end belongs to it
 * @param high upper end
 * @param withHigh whether the upper end belongs to it
 */
public record Range(double low, boolean withLow, double high, boolean withHigh) {

    /** Both ends belong to it. */
    public static Range closed(double low, double high) {
        return new Range(low, true, high, true);
    }

    /** Neither end belongs to it. */
    public static Range open(double low, double high) {
        return new Range(low, false, high, false);
    }

    /** Its lower end alone does not belong to it. */
    public static Range above(double low, double high) {
        return new Range(low, false, high, true);
    }

    /** Whether a number lies in it; NaN lies in none. */
    public boolean holds(double value) {
        return (withLow ? value >= low : value > low) && (withHigh ? value <= high : value < high);
    }
}
