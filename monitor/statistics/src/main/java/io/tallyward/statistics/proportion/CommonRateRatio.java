package io.tallyward.statistics.proportion;

import java.util.List;
import java.util.Optional;
import java.util.OptionalDouble;

/**
 * The ratio of success rates common to all strata: Greenland and Robins, "Estimation of a common effect parameter from
 * sparse follow-up data", Biometrics 41 (1985) 55-68 (from memory, checked against the reference file).
 *
 * <p>With {@code a} of {@code n1} and {@code b} of {@code n0} successes, {@code N = n1 + n0} and {@code m = a + b} per
 * stratum, {@code R = a n0 / N}, {@code S = b n1 / N}: {@code value = sum R / sum S}, {@code logVariance = sum ((m n1 n0 - a
 * b N) / N^2) / (sum R sum S)}. The cancelling difference is formed as {@code a n1 (n0 - b) + b n0 (n1 - a)}. Relative
 * error below 1e-14.
 *
 * @param value rate of the variant over rate of the control; 0 or more
 * @param logVariance variance of the natural logarithm; empty if the value is 0
 */
public record CommonRateRatio(double value, OptionalDouble logVariance) {

    public CommonRateRatio {
        requireRatio(value, logVariance);
    }

    /**
     * Estimates.
     *
     * @return empty while no stratum has trials of the variant and successes of the control
     */
    public static Optional<CommonRateRatio> of(List<Stratum> strata) {
        double r = 0;
        double s = 0;
        double spread = 0;
        for (StratumTable table : StratumTable.informative(strata)) {
            double all = table.all();
            r += table.a() * (table.n0() / all);
            s += table.b() * (table.n1() / all);
            spread += table.a() * (table.n1() / all) * ((table.n0() - table.b()) / all)
                    + table.b() * (table.n0() / all) * ((table.n1() - table.a()) / all);
        }
        if (!(s > 0)) {
            return Optional.empty();
        }
        return Optional.of(
                new CommonRateRatio(r / s, r == 0 ? OptionalDouble.empty() : OptionalDouble.of(spread / r / s)));
    }

    /**
     * {@code value exp(-/+ z sqrt(logVariance))}; empty without a variance.
     *
     * @param confidence coverage of both sides together, in (0, 1)
     */
    public Optional<Interval> interval(double confidence) {
        return interval(value, logVariance, confidence);
    }

    static Optional<Interval> interval(double value, OptionalDouble logVariance, double confidence) {
        Interval.deviations(confidence);
        return logVariance.isPresent()
                ? Optional.of(Interval.aroundLogarithm(value, StrictMath.sqrt(logVariance.getAsDouble()), confidence))
                : Optional.empty();
    }

    static void requireRatio(double value, OptionalDouble logVariance) {
        if (!(value >= 0 && value < Double.POSITIVE_INFINITY)) {
            throw new IllegalArgumentException("value: " + value + " (expected: 0 or more, finite)");
        }
        double variance = logVariance.orElse(0);
        if (!(variance >= 0 && variance < Double.POSITIVE_INFINITY) || logVariance.isPresent() && value == 0) {
            throw new IllegalArgumentException(
                    "logVariance: " + variance + " (expected: 0 or more, finite; none for a value of 0)");
        }
    }
}
