package io.tallyward.statistics.proportion;

import java.math.BigInteger;
import java.util.List;
import java.util.Optional;

/**
 * A variant against the control over strata: Cochran, "Some methods for strengthening the common chi-squared tests",
 * Biometrics 10 (1954) 417-451, section 6, <a href="https://doi.org/10.2307/3001616">doi</a>. With one stratum {@code z}
 * is the pooled two-proportion statistic without continuity correction.
 *
 * <p>With {@code n1, n0} trials, {@code N} their sum, {@code w = n1 n0 / N}, and {@code p} the rate of both arms pooled,
 * all per stratum: {@code difference = sum w (p1 - p0) / sum w}, {@code information = (sum w)^2 / sum w p (1 - p)}, and
 * {@code z = difference sqrt(information)}.
 *
 * @param z the statistic of variant minus control; standard normal without an effect
 * @param difference the weighted difference of success rates, variant minus control
 * @param information the inverse of the variance of {@code difference} without an effect; positive and finite
 */
public record StratifiedComparison(double z, double difference, double information) {

    /**
     * Compares.
     *
     * @return empty while there is no information: no stratum has trials in both arms, and successes and failures
     */
    public static Optional<StratifiedComparison> of(List<Stratum> strata) {
        double excess = 0;
        double weight = 0;
        double variance = 0;
        for (Stratum stratum : strata) {
            double trials = stratum.trials();
            double controlTrials = stratum.controlTrials();
            if (trials == 0 || controlTrials == 0) {
                continue;
            }
            double both = trials + controlTrials;
            double successes = (double) stratum.successes() + stratum.controlSuccesses();
            double w = trials * (controlTrials / both);
            weight += w;
            excess += crossDifference(stratum) / both;
            variance += w * (successes / both) * ((both - successes) / both);
        }
        if (!(variance > 0)) {
            return Optional.empty();
        }
        return Optional.of(new StratifiedComparison(
                excess / StrictMath.sqrt(variance), excess / weight, weight * (weight / variance)));
    }

    /** {@code a n0 - b n1}, exact until it is rounded once: the products cancel to a small part of themselves. */
    static double crossDifference(Stratum stratum) {
        BigInteger own = BigInteger.valueOf(stratum.successes()).multiply(BigInteger.valueOf(stratum.controlTrials()));
        BigInteger other =
                BigInteger.valueOf(stratum.controlSuccesses()).multiply(BigInteger.valueOf(stratum.trials()));
        return own.subtract(other).doubleValue();
    }
}
