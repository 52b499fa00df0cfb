package io.tallyward.statistics.proportion;

import java.math.BigInteger;
import java.util.List;
import java.util.Optional;

/**
 * The difference of success rates common to all strata, with two estimates of its variance. Unlike the variance behind
 * {@link StratifiedComparison}, which holds without an effect and serves the test, these hold with one and serve the
 * interval.
 *
 * <p>With {@code a} of {@code n1} and {@code b} of {@code n0} successes, {@code N = n1 + n0} and {@code w = n1 n0 / N} per
 * stratum, and sums over strata: {@code value = sum ((a n0 - b n1) / N) / sum w}.
 *
 * <p>Greenland and Robins, Biometrics 41 (1985) 55-68: {@code sum ((a (n1 - a) n0^3 + b (n0 - b) n1^3) / (n1 n0 N^2)) / (sum
 * w)^2}; for few large strata. Sato, "On the variance estimator of the Mantel-Haenszel risk difference", Biometrics 45
 * (1989) 1323-1324: {@code (value sum P + sum Q) / (sum w)^2} with {@code P = (n1^2 b - n0^2 a + n1 n0 (n0 - n1) / 2) / N^2}
 * and {@code Q = (a (n0 - b) + b (n1 - a)) / (2 N)}; for many sparse strata as well. Both formulas from memory, checked
 * against the reference file. Relative error below 1e-12.
 *
 * @param value variant minus control, in [-1, 1]
 * @param satoVariance 0 or more
 * @param greenlandRobinsVariance 0 or more; 0 if each arm's trials all ended alike in every stratum
 */
public record CommonRateDifference(double value, double satoVariance, double greenlandRobinsVariance) {

    public CommonRateDifference {
        if (!(value >= -1 && value <= 1)) {
            throw new IllegalArgumentException("value: " + value + " (expected: in [-1, 1])");
        }
        requireVariance("satoVariance", satoVariance);
        requireVariance("greenlandRobinsVariance", greenlandRobinsVariance);
    }

    /**
     * Estimates.
     *
     * @return empty while no stratum has trials in both arms
     */
    public static Optional<CommonRateDifference> of(List<Stratum> strata) {
        double weight = 0;
        double excess = 0;
        double p = 0;
        double q = 0;
        double within = 0;
        for (StratumTable table : StratumTable.informative(strata)) {
            double all = table.all();
            double failures = table.n1() - table.a();
            double controlFailures = table.n0() - table.b();
            weight += table.n1() * (table.n0() / all);
            excess += table.cross() / all;
            q += 0.5 * (table.a() * (controlFailures / all) + table.b() * (failures / all));
            double share = table.n0() / all;
            double controlShare = table.n1() / all;
            within += table.a() * (failures / table.n1()) * share * share
                    + table.b() * (controlFailures / table.n0()) * controlShare * controlShare;
        }
        for (Stratum stratum : strata) {
            p += satoP(stratum);
        }
        if (!(weight > 0)) {
            return Optional.empty();
        }
        double value = StrictMath.max(-1, StrictMath.min(1, excess / weight));
        // never negative but for rounding, as where all of the variant succeed and none of the control
        double sato = StrictMath.max(0, value * p + q);
        return Optional.of(new CommonRateDifference(value, sato / weight / weight, within / weight / weight));
    }

    /**
     * {@code value -/+ z sqrt(variance)} with Sato's variance; not cut at -1 and 1.
     *
     * @param confidence coverage of both sides together, in (0, 1)
     */
    public Interval satoInterval(double confidence) {
        return interval(satoVariance, confidence);
    }

    /**
     * {@code value -/+ z sqrt(variance)} with Greenland and Robins' variance; not cut at -1 and 1.
     *
     * @param confidence coverage of both sides together, in (0, 1)
     */
    public Interval greenlandRobinsInterval(double confidence) {
        return interval(greenlandRobinsVariance, confidence);
    }

    private Interval interval(double variance, double confidence) {
        double reach = Interval.deviations(confidence) * StrictMath.sqrt(variance);
        return new Interval(value - reach, value + reach);
    }

    /** Sato's P, its cancelling numerator formed exactly (twice of it, to stay whole). */
    private static double satoP(Stratum stratum) {
        if (stratum.trials() == 0 || stratum.controlTrials() == 0) {
            return 0;
        }
        BigInteger a = BigInteger.valueOf(stratum.successes());
        BigInteger b = BigInteger.valueOf(stratum.controlSuccesses());
        BigInteger n1 = BigInteger.valueOf(stratum.trials());
        BigInteger n0 = BigInteger.valueOf(stratum.controlTrials());
        BigInteger unequal = n1.multiply(n0).multiply(n0.subtract(n1));
        BigInteger twice = n1.multiply(n1)
                .multiply(b)
                .subtract(n0.multiply(n0).multiply(a))
                .shiftLeft(1)
                .add(unequal);
        double all = n1.add(n0).doubleValue();
        return 0.5 * twice.doubleValue() / all / all;
    }

    private static void requireVariance(String name, double variance) {
        if (!(variance >= 0 && variance < Double.POSITIVE_INFINITY)) {
            throw new IllegalArgumentException(name + ": " + variance + " (expected: 0 or more, finite)");
        }
    }
}
