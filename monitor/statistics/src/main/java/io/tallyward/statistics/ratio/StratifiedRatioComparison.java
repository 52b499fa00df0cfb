package io.tallyward.statistics.ratio;

import io.tallyward.statistics.proportion.ZStatistic;
import java.util.List;
import java.util.Optional;

/**
 * A variant against the control by ratios of sums over strata: the weights of Cochran, Biometrics 10 (1954) 417-451, section
 * 6, with the variance between units of {@link RatioEstimate} instead of the binomial one (recalled).
 *
 * <p>With {@code x1, x0} the sums of denominators, {@code w = x1 x0 / (x1 + x0)}, ratios {@code R1, R0} and their variances
 * {@code v1, v0}, all per stratum: {@code difference = sum w (R1 - R0) / sum w}, {@code scoreVariance = sum w^2 (v1 + v0)},
 * {@code information = (sum w)^2 / scoreVariance} and {@code z = difference sqrt(information)}. Each arm has its own variance;
 * there is no pooled one, as a pooled ratio says nothing about how units of an arm differ. Where every unit is one trial the
 * difference is that of {@link io.tallyward.statistics.proportion.StratifiedComparison}, and z its unpooled counterpart with
 * divisors {@code n - 1}.
 *
 * <p>Within a stratum, differences at two moments have the covariance of independent increments, {@code Cov(D_j, D_k) =
 * Var(D_k)}, if the units behind earlier views have no more views in the end than those behind later ones. Units that come
 * back have more: then looks are more alike than {@code information} says, and boundaries computed from it err to the safe
 * side (Slepian 1962, recalled). Over strata {@code scoreVariance} is the clock; it errs to that side likewise.
 *
 * <p>Relative error of all values below 2e-14; of z relative to 1e-6 at least, as differences may cancel over strata.
 *
 * @param z variant minus control; standard normal without an effect once there are many units, none of which outweighs the
 *     rest
 * @param difference the weighted difference of ratios; finite
 * @param information one over the variance of {@code difference}; positive and finite
 * @param scoreVariance variance of {@code sum w (R1 - R0)}; positive and finite
 * @param controlRatio the control's ratios, weighted likewise; finite
 * @param controlVariance the control's part of the variance of {@code difference}; 0 or more
 * @param variantVariance the variant's part; 0 or more
 */
public record StratifiedRatioComparison(
        double z,
        double difference,
        double information,
        double scoreVariance,
        double controlRatio,
        double controlVariance,
        double variantVariance) {

    public StratifiedRatioComparison {
        new ZStatistic(z);
        requireFinite("difference", difference);
        requirePositive("information", information);
        requirePositive("scoreVariance", scoreVariance);
        requireFinite("controlRatio", controlRatio);
        requireVariance("controlVariance", controlVariance);
        requireVariance("variantVariance", variantVariance);
    }

    /**
     * Compares.
     *
     * @param strata in any order; those in which an arm has fewer than two units, or no denominators, are passed over
     * @return empty while there is no information: no stratum is left, or nothing varies between units
     */
    public static Optional<StratifiedRatioComparison> of(List<RatioStratum> strata) {
        double weight = 0;
        double excess = 0;
        double rate = 0;
        double own = 0;
        double control = 0;
        for (RatioStratum stratum : strata) {
            Optional<RatioComparison> found = RatioComparison.of(stratum.variant(), stratum.control());
            if (found.isEmpty()) {
                continue;
            }
            double w = weight(stratum);
            weight += w;
            excess += w * found.get().difference();
            rate += w * found.get().control().ratio();
            own += w * w * found.get().variant().variance();
            control += w * w * found.get().control().variance();
        }
        double variance = own + control;
        return variance > 0
                ? Optional.of(new StratifiedRatioComparison(
                        excess / StrictMath.sqrt(variance),
                        excess / weight,
                        weight * (weight / variance),
                        variance,
                        rate / weight,
                        control / weight / weight,
                        own / weight / weight))
                : Optional.empty();
    }

    private static double weight(RatioStratum stratum) {
        double own = stratum.variant().denominator().doubleValue();
        double other = stratum.control().denominator().doubleValue();
        return own * (other / (own + other));
    }

    private static void requireFinite(String name, double value) {
        if (!(StrictMath.abs(value) < Double.POSITIVE_INFINITY)) {
            throw new IllegalArgumentException(name + ": " + value + " (expected: finite)");
        }
    }

    private static void requirePositive(String name, double value) {
        if (!(value > 0 && value < Double.POSITIVE_INFINITY)) {
            throw new IllegalArgumentException(name + ": " + value + " (expected: positive and finite)");
        }
    }

    private static void requireVariance(String name, double value) {
        if (!(value >= 0 && value < Double.POSITIVE_INFINITY)) {
            throw new IllegalArgumentException(name + ": " + value + " (expected: 0 or more, finite)");
        }
    }
}
