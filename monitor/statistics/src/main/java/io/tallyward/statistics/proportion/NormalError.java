package io.tallyward.statistics.proportion;

import io.tallyward.statistics.distribution.Normal;
import java.util.List;

/**
 * How far the normal law is off for the pooled statistic of {@link StratifiedComparison}: the first term of Edgeworth's
 * expansion (Edgeworth 1905; Feller, "An Introduction to Probability Theory and Its Applications" II, 1971, section XVI.4,
 * recalled).
 *
 * <p>A difference of two proportions is skewed unless the arms are of one size or the rate is one half. With
 * {@code w = n1 n0 / N} and {@code p} the pooled rate, all per stratum, its third cumulant over its standard deviation cubed
 * is {@code sum w p (1 - p) (1 - 2 p) (n0 - n1) / N / (sum w p (1 - p))^(3/2)}: for rare successes about
 * {@code (s0 - s1) / sqrt(s1 s0 m)} with shares {@code s1, s0} and {@code m} successes in all.
 *
 * <p>The term describes the direction and the size of the error while it is small against the tail itself; the lattice of
 * counts adds an error of either sign that averages out over looks.
 */
public final class NormalError {

    private NormalError() {}

    /**
     * Skewness of the statistic of variant minus control without an effect.
     *
     * @return 0 while there is no information; positive if the upper tail is the heavier one
     */
    public static double skewness(List<Stratum> strata) {
        double third = 0;
        double variance = 0;
        for (Stratum stratum : strata) {
            double own = stratum.trials();
            double control = stratum.controlTrials();
            if (own == 0 || control == 0) {
                continue;
            }
            double both = own + control;
            double rate = ((double) stratum.successes() + stratum.controlSuccesses()) / both;
            double term = own * (control / both) * rate * (1 - rate);
            variance += term;
            third += term * (1 - 2 * rate) * ((control - own) / both);
        }
        return variance > 0 ? third / (variance * StrictMath.sqrt(variance)) : 0;
    }

    /**
     * What skewness adds to the probability of a tail that begins at a boundary: {@code phi(c) (c^2 - 1) skewness / 6}.
     *
     * @param skewness towards the tail: of the statistic for the upper tail, minus that for the lower one; finite
     * @param boundary distance c of the boundary from 0, in standard deviations; 0 or more
     * @return added to the nominal probability; negative where the tail is the lighter one
     */
    public static double tail(double skewness, double boundary) {
        if (!(StrictMath.abs(skewness) < Double.POSITIVE_INFINITY)) {
            throw new IllegalArgumentException("skewness: " + skewness + " (expected: finite)");
        }
        if (!(boundary >= 0)) {
            throw new IllegalArgumentException("boundary: " + boundary + " (expected: 0 or more)");
        }
        double density = Normal.density(boundary);
        return density == 0 ? 0 : density * (boundary * boundary - 1) * skewness / 6;
    }
}
