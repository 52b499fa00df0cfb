package io.tallyward.statistics.proportion;

import java.util.Optional;
import java.util.OptionalDouble;

/**
 * The ratio of two success rates, also called relative risk: Katz, Baptista, Azen and Pike, "Obtaining confidence
 * intervals for the risk ratio in cohort studies", Biometrics 34 (1978) 469-474 (their method C; formula from memory,
 * checked against the reference file): {@code ln(p1 / p0)} has variance {@code 1/x1 - 1/n1 + 1/x0 - 1/n0}.
 *
 * @param value rate of the variant over rate of the control; 0 or more. Relative error below 1e-15
 * @param logStandardError standard error of the natural logarithm; empty if the variant has no success. Relative error
 *     below 1e-14
 */
public record RateRatio(double value, OptionalDouble logStandardError) {

    public RateRatio {
        if (!(value >= 0 && value < Double.POSITIVE_INFINITY)) {
            throw new IllegalArgumentException("value: " + value + " (expected: 0 or more, finite)");
        }
        double error = logStandardError.orElse(0);
        if (!(error >= 0 && error < Double.POSITIVE_INFINITY) || logStandardError.isPresent() && value == 0) {
            throw new IllegalArgumentException(
                    "logStandardError: " + error + " (expected: 0 or more, finite; none for a value of 0)");
        }
    }

    /**
     * Compares.
     *
     * @return empty while the variant has no trials or the control no success
     */
    public static Optional<RateRatio> of(Stratum stratum) {
        double n1 = stratum.trials();
        double n0 = stratum.controlTrials();
        double x1 = stratum.successes();
        double x0 = stratum.controlSuccesses();
        if (n1 == 0 || x0 == 0) {
            return Optional.empty();
        }
        // 1/x - 1/n without the cancellation of rates near 1
        OptionalDouble error = x1 == 0
                ? OptionalDouble.empty()
                : OptionalDouble.of(StrictMath.sqrt((n1 - x1) / x1 / n1 + (n0 - x0) / x0 / n0));
        return Optional.of(new RateRatio(x1 / n1 / (x0 / n0), error));
    }

    /**
     * The Katz interval {@code value exp(-/+ z se)}; empty without a standard error.
     *
     * @param confidence coverage of both sides together, in (0, 1)
     */
    public Optional<Interval> interval(double confidence) {
        Interval.deviations(confidence);
        return logStandardError.isPresent()
                ? Optional.of(Interval.aroundLogarithm(value, logStandardError.getAsDouble(), confidence))
                : Optional.empty();
    }
}
