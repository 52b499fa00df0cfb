package io.tallyward.statistics.proportion;

import io.tallyward.statistics.distribution.Normal;
import java.util.List;
import java.util.Optional;

/**
 * A statistic that is standard normal without an effect, and what may be read from it at a single look. Probabilities
 * have relative error below 1e-13 as long as they are above 1e-290; logarithms have no such limit. Neither is valid when
 * a look was taken before: that is what boundaries are for.
 *
 * @param z variant minus control, in standard deviations; at most 1e150 either way
 */
public record ZStatistic(double z) {

    /** Its square is still a double. */
    private static final double FARTHEST = 1e150;

    private static final double LN_2 = StrictMath.log(2);
    private static final double LN_10 = StrictMath.log(10);

    public ZStatistic {
        if (!(StrictMath.abs(z) <= FARTHEST)) {
            throw new IllegalArgumentException("z: " + z + " (expected: in [-1e150, 1e150])");
        }
    }

    /**
     * The comparison of two proportions with the pooled estimate of variance, without continuity correction: with {@code
     * p} the rate of both arms pooled, {@code (p1 - p0) / sqrt(p (1 - p) (1/n1 + 1/n0))}. Its square is Pearson's
     * chi-square of the two-by-two table (Pearson 1900). Relative error below 2e-14 for any counts.
     *
     * @return empty while an arm has no trials, or all trials ended alike
     */
    public static Optional<ZStatistic> pooled(Stratum stratum) {
        return StratifiedComparison.of(List.of(stratum)).map(comparison -> new ZStatistic(comparison.z()));
    }

    /**
     * The comparison of two proportions with each arm's own variance (Wald): {@code (p1 - p0) / sqrt(p1 (1 - p1) / n1 + p0 (1
     * - p0) / n0)}. With equal arms never nearer to 0 than the pooled one; rejects too often for small counts. Relative error
     * below 2e-14.
     *
     * @return empty while an arm has no trials, or each arm's trials all ended alike
     */
    public static Optional<ZStatistic> unpooled(Stratum stratum) {
        return RateDifference.of(stratum).flatMap(RateDifference::z);
    }

    /**
     * The comparison of two proportions by their ratio: {@code ln(p1 / p0) / sqrt(1/x1 - 1/n1 + 1/x0 - 1/n0)}, after Katz,
     * Baptista, Azen and Pike (1978, recalled). The interval of {@link RateRatio} leaves out 1 where this is beyond the
     * interval's own number of standard errors. Relative error below 2e-14, that of nearly equal rates included.
     *
     * @return empty while an arm has no success, or all trials succeeded
     */
    public static Optional<ZStatistic> ratio(Stratum stratum) {
        Optional<RateRatio> ratio = RateRatio.of(stratum);
        double error = ratio.map(found -> found.logStandardError().orElse(0)).orElse(0.0);
        if (!(error > 0)) {
            return Optional.empty();
        }
        double change = StratifiedComparison.crossDifference(stratum)
                / ((double) stratum.trials() * stratum.controlSuccesses());
        double log = StrictMath.abs(change) < 0.5
                ? StrictMath.log1p(change)
                : StrictMath.log(ratio.orElseThrow().value());
        return Optional.of(new ZStatistic(log / error));
    }

    /** The probability of at least {@code z}: small if the variant has the higher rate. 0 below 1e-308 or so. */
    public double pGreater() {
        return Normal.survival(z);
    }

    /** The probability of at most {@code z}: small if the variant has the lower rate. 0 below 1e-308 or so. */
    public double pLess() {
        return Normal.cdf(z);
    }

    /** The probability of being at least as far from 0 as {@code z}. 0 below 1e-308 or so. */
    public double pTwoSided() {
        return 2 * Normal.survival(StrictMath.abs(z));
    }

    /** The decimal logarithm of {@link #pGreater}; never underflows. */
    public double log10PGreater() {
        return Normal.logSurvival(z) / LN_10;
    }

    /** The decimal logarithm of {@link #pLess}; never underflows. */
    public double log10PLess() {
        return Normal.logSurvival(-z) / LN_10;
    }

    /** The decimal logarithm of {@link #pTwoSided}; never underflows. */
    public double log10PTwoSided() {
        return StrictMath.min(0, (Normal.logSurvival(StrictMath.abs(z)) + LN_2) / LN_10);
    }
}
