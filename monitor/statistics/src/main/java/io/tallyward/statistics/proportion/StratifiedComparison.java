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
 * <p>Weights depend on the counts of trials alone, so neither rates that drift in both arms alike nor a ramp of the
 * allocation can fake a difference. Over strata of unlike rates {@code sum w p (1 - p)}, by which independent increments
 * of {@code z} add up, and {@code information} are two clocks; with one rate throughout they are one. Relative error of
 * all values below 2e-14; of z relative to 1e-6 at least, as differences may cancel over strata.
 *
 * @param z the statistic of variant minus control; standard normal without an effect
 * @param difference the weighted difference of success rates, variant minus control; in [-1, 1]
 * @param information the inverse of the variance of {@code difference} without an effect; positive and finite
 * @param scoreVariance {@code sum w p (1 - p)}, the variance of the score {@code sum w (p1 - p0)} without an effect. Scores of
 *     disjoint data add up, so {@code Cov(z_j, z_k) = sqrt(V_j / V_k)} for an earlier look j and a later one k: over strata of
 *     unlike rates this, and not {@code information}, is the clock that boundaries have to go by; positive and finite
 */
public record StratifiedComparison(double z, double difference, double information, double scoreVariance) {

    public StratifiedComparison {
        requireValues(z, difference, information);
        if (!(scoreVariance > 0 && scoreVariance < Double.POSITIVE_INFINITY)) {
            throw new IllegalArgumentException("scoreVariance: " + scoreVariance + " (expected: positive and finite)");
        }
    }

    /**
     * Compares.
     *
     * @param strata in any order; those without trials in both arms are passed over
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
                excess / StrictMath.sqrt(variance),
                StrictMath.max(-1, StrictMath.min(1, excess / weight)),
                weight * (weight / variance),
                variance));
    }

    /** {@code a n0 - b n1}, exact until it is rounded once: the products cancel to a small part of themselves. */
    static double crossDifference(Stratum stratum) {
        BigInteger own = BigInteger.valueOf(stratum.successes()).multiply(BigInteger.valueOf(stratum.controlTrials()));
        BigInteger other =
                BigInteger.valueOf(stratum.controlSuccesses()).multiply(BigInteger.valueOf(stratum.trials()));
        return own.subtract(other).doubleValue();
    }

    static void requireValues(double z, double difference, double information) {
        new ZStatistic(z);
        if (!(difference >= -1 && difference <= 1)) {
            throw new IllegalArgumentException("difference: " + difference + " (expected: in [-1, 1])");
        }
        if (!(information > 0 && information < Double.POSITIVE_INFINITY)) {
            throw new IllegalArgumentException("information: " + information + " (expected: positive and finite)");
        }
    }
}
