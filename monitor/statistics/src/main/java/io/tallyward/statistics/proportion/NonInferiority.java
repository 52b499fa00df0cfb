package io.tallyward.statistics.proportion;

import java.util.List;
import java.util.Optional;

/**
 * The test that a variant is not worse than the control by a margin or more, over strata: Farrington and Manning, "Test
 * statistics and sample size formulae for comparative binomial trials with null hypothesis of non-zero risk difference or
 * non-unity relative risk", Statistics in Medicine 9 (1990) 1447-1454 (from memory; checked against Miettinen and
 * Nurminen's intervals, which invert the same statistic).
 *
 * <p>With the margin's difference {@code d0}, {@code n1, n0} trials, {@code w = n1 n0 / (n1 + n0)}, and {@code V} the
 * variance of {@code p1 - p0} at the most likely rates that differ by {@code d0}, all per stratum: {@code difference = sum w
 * (p1 - p0) / sum w}, {@code information = (sum w)^2 / sum w^2 V}, {@code z = (difference - d0) sqrt(information)}, with the
 * sign reversed if a rise is guarded against. With {@code d0 = 0} this would be {@link StratifiedComparison}, whose weights
 * it shares: they depend on the counts of trials alone, so that what later looks add is as good as independent.
 *
 * <p>Unlike the test of no difference it is defined from the first trials on, whether or not there are successes. Error of z
 * below {@code 1e-14 |z| + 2e-16 |d0| sqrt(information)}.
 *
 * @param z standard normal where the true difference is the margin's; large values speak for non-inferiority. Held against
 *     the upper boundary of a one-sided test
 * @param difference the weighted difference of success rates, variant minus control; in [-1, 1]
 * @param information the inverse of the variance of {@code difference} where the true difference is the margin's; positive
 *     and finite
 */
public record NonInferiority(double z, double difference, double information) {

    public NonInferiority {
        StratifiedComparison.requireValues(z, difference, information);
    }

    /**
     * Compares.
     *
     * @return empty while no stratum has trials in both arms
     */
    public static Optional<NonInferiority> of(List<Stratum> strata, Margin margin) {
        double nothing = margin.nullDifference();
        double weight = 0;
        double excess = 0;
        double variance = 0;
        for (Stratum stratum : strata) {
            if (stratum.trials() == 0 || stratum.controlTrials() == 0) {
                continue;
            }
            double both = (double) stratum.trials() + stratum.controlTrials();
            double w = stratum.trials() * (stratum.controlTrials() / both);
            weight += w;
            excess += StratifiedComparison.crossDifference(stratum) / both;
            variance += w * w * ConstrainedRates.variance(stratum, nothing);
        }
        if (!(variance > 0)) {
            return Optional.empty();
        }
        double beyond = excess - nothing * weight;
        double z = (margin.guardsAgainstFall() ? beyond : -beyond) / StrictMath.sqrt(variance);
        double difference = StrictMath.max(-1, StrictMath.min(1, excess / weight));
        return Optional.of(new NonInferiority(z, difference, weight * (weight / variance)));
    }

    /** What may be read from z at a single look; {@code pGreater} is the p-value of the test. */
    public ZStatistic statistic() {
        return new ZStatistic(z);
    }
}
