package io.tallyward.statistics.ratio;

import io.tallyward.statistics.proportion.ZStatistic;
import java.math.BigInteger;
import java.util.Optional;

/**
 * A variant against the control by a ratio of sums. Units of different arms are independent, so variances add up;
 * {@code z} is standard normal without an effect once there are many units, none of which outweighs the rest.
 *
 * <p>The logarithm of the ratio has standard error {@code sqrt(var1 / R1^2 + var0 / R0^2)} by the delta method. Relative
 * error of all values below 1e-14, the difference of nearly equal ratios included.
 *
 * @param variant the variant's ratio
 * @param control the control's ratio
 * @param difference variant minus control
 */
public record RatioComparison(RatioEstimate variant, RatioEstimate control, double difference) {

    public RatioComparison {
        if (!(StrictMath.abs(difference) < Double.POSITIVE_INFINITY)) {
            throw new IllegalArgumentException("difference: " + difference + " (expected: finite)");
        }
    }

    /**
     * The logarithm of variant over control.
     *
     * @param value natural logarithm of the ratio of ratios
     * @param standardError 0 or more
     */
    public record LogRatio(double value, double standardError) {

        public LogRatio {
            if (!(StrictMath.abs(value) < Double.POSITIVE_INFINITY)) {
                throw new IllegalArgumentException("value: " + value + " (expected: finite)");
            }
            if (!(standardError >= 0 && standardError < Double.POSITIVE_INFINITY)) {
                throw new IllegalArgumentException(
                        "standardError: " + standardError + " (expected: 0 or more, finite)");
            }
        }
    }

    /**
     * Compares.
     *
     * @return empty while an arm has fewer than two units or only denominators of 0
     */
    public static Optional<RatioComparison> of(UnitSums variant, UnitSums control) {
        Optional<RatioEstimate> own = RatioEstimate.of(variant);
        Optional<RatioEstimate> other = RatioEstimate.of(control);
        if (own.isEmpty() || other.isEmpty()) {
            return Optional.empty();
        }
        BigInteger cross = variant.numerator()
                .multiply(control.denominator())
                .subtract(control.numerator().multiply(variant.denominator()));
        double difference = cross.doubleValue()
                / variant.denominator().doubleValue()
                / control.denominator().doubleValue();
        return Optional.of(new RatioComparison(own.get(), other.get(), difference));
    }

    /** Standard error of the difference; 0 if no arm varies between units. */
    public double standardError() {
        return StrictMath.sqrt(variant.variance() + control.variance());
    }

    /** The difference in standard errors; empty if nothing varies. */
    public Optional<ZStatistic> z() {
        double error = standardError();
        return error > 0 ? Optional.of(new ZStatistic(difference / error)) : Optional.empty();
    }

    /** The logarithm of variant over control; empty unless both ratios are positive. */
    public Optional<LogRatio> logRatio() {
        double own = variant.ratio();
        double other = control.ratio();
        if (!(own > 0 && other > 0)) {
            return Optional.empty();
        }
        double change = difference / other;
        double value = StrictMath.abs(change) < 0.5 ? StrictMath.log1p(change) : StrictMath.log(own / other);
        double error = StrictMath.sqrt(variant.variance() / own / own + control.variance() / other / other);
        return Optional.of(new LogRatio(value, error));
    }
}
