package io.tallyward.statistics.proportion;

import java.util.List;
import java.util.Optional;
import java.util.OptionalDouble;

/**
 * The odds ratio common to all strata: Mantel and Haenszel (1959), with the variance of its logarithm of Robins, Breslow
 * and Greenland, "Estimators of the Mantel-Haenszel variance consistent in both sparse data and large-strata limiting
 * models", Biometrics 42 (1986) 311-323 (from memory, checked against R's {@code mantelhaen.test}).
 *
 * <p>With {@code a} of {@code n1} and {@code b} of {@code n0} successes and {@code N = n1 + n0} per stratum, {@code R = a
 * (n0 - b) / N}, {@code S = b (n1 - a) / N}, {@code P = (a + n0 - b) / N}, {@code Q = (b + n1 - a) / N}, and sums over
 * strata: {@code value = sum R / sum S}, {@code logVariance = sum P R / (2 (sum R)^2) + sum (P S + Q R) / (2 sum R sum S) +
 * sum Q S / (2 (sum S)^2)}. Relative error below 1e-14.
 *
 * @param value odds of the variant over odds of the control; 0 or more
 * @param logVariance variance of the natural logarithm; empty if the value is 0
 */
public record CommonOddsRatio(double value, OptionalDouble logVariance) {

    public CommonOddsRatio {
        CommonRateRatio.requireRatio(value, logVariance);
    }

    /**
     * Estimates.
     *
     * @return empty while no stratum has failures of the variant and successes of the control
     */
    public static Optional<CommonOddsRatio> of(List<Stratum> strata) {
        double r = 0;
        double s = 0;
        double pr = 0;
        double cross = 0;
        double qs = 0;
        for (StratumTable table : StratumTable.informative(strata)) {
            double failures = table.n1() - table.a();
            double controlFailures = table.n0() - table.b();
            double ownR = table.a() * (controlFailures / table.all());
            double ownS = table.b() * (failures / table.all());
            double p = (table.a() + controlFailures) / table.all();
            double q = (table.b() + failures) / table.all();
            r += ownR;
            s += ownS;
            pr += p * ownR;
            cross += p * ownS + q * ownR;
            qs += q * ownS;
        }
        if (!(s > 0)) {
            return Optional.empty();
        }
        return Optional.of(new CommonOddsRatio(
                r / s,
                r == 0 ? OptionalDouble.empty() : OptionalDouble.of(0.5 * (pr / r / r + cross / r / s + qs / s / s))));
    }

    /**
     * {@code value exp(-/+ z sqrt(logVariance))}; empty without a variance.
     *
     * @param confidence coverage of both sides together, in (0, 1)
     */
    public Optional<Interval> interval(double confidence) {
        return CommonRateRatio.interval(value, logVariance, confidence);
    }
}
