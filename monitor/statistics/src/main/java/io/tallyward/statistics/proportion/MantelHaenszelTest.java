package io.tallyward.statistics.proportion;

import io.tallyward.statistics.distribution.Normal;
import java.util.List;
import java.util.Optional;

/**
 * A variant against the control over strata, given how many succeeded in each: Mantel and Haenszel, "Statistical aspects
 * of the analysis of data from retrospective studies of disease", Journal of the National Cancer Institute 22 (1959)
 * 719-748.
 *
 * <p>With {@code a} of {@code n1} and {@code b} of {@code n0} successes, {@code N = n1 + n0} and {@code m = a + b} per
 * stratum: {@code excess = sum (a - n1 m / N)}, {@code variance = sum n1 n0 m (N - m) / (N^2 (N - 1))}, {@code z = excess
 * / sqrt(variance)}. {@link StratifiedComparison} has {@code N^3} in place of {@code N^2 (N - 1)}: the same but for small
 * strata. Relative error below 1e-13.
 *
 * @param z standard normal without an effect
 * @param correctedChiSquare {@code max(0, |excess| - 1/2)^2 / variance}: chi-square with one degree of freedom, with
 *     continuity correction
 */
public record MantelHaenszelTest(double z, double correctedChiSquare) {

    public MantelHaenszelTest {
        new ZStatistic(z);
        if (!(correctedChiSquare >= 0 && correctedChiSquare < Double.POSITIVE_INFINITY)) {
            throw new IllegalArgumentException(
                    "correctedChiSquare: " + correctedChiSquare + " (expected: 0 or more, finite)");
        }
    }

    /**
     * Compares.
     *
     * @return empty while no stratum has trials in both arms, and successes and failures
     */
    public static Optional<MantelHaenszelTest> of(List<Stratum> strata) {
        double excess = 0;
        double variance = 0;
        for (StratumTable table : StratumTable.informative(strata)) {
            excess += table.cross() / table.all();
            variance += table.n1()
                    * (table.n0() / table.all())
                    * (table.successes() / table.all())
                    * ((table.all() - table.successes()) / (table.all() - 1));
        }
        if (!(variance > 0)) {
            return Optional.empty();
        }
        double corrected = StrictMath.max(0, StrictMath.abs(excess) - 0.5);
        return Optional.of(
                new MantelHaenszelTest(excess / StrictMath.sqrt(variance), corrected * (corrected / variance)));
    }

    /** The chi-square with one degree of freedom, without continuity correction. */
    public double chiSquare() {
        return z * z;
    }

    /** One- and two-sided probabilities without continuity correction. */
    public ZStatistic statistic() {
        return new ZStatistic(z);
    }

    /** The two-sided probability with continuity correction; 1 if the correction leaves nothing. */
    public double correctedPTwoSided() {
        return 2 * Normal.survival(StrictMath.sqrt(correctedChiSquare));
    }
}
