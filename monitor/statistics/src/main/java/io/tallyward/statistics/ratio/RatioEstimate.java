package io.tallyward.statistics.ratio;

import java.math.BigInteger;
import java.util.Optional;

/**
 * A ratio of sums with its variance between units: the delta method (linearisation; Cochran, "Sampling Techniques", 3rd
 * edition 1977, section 2.11, from memory).
 *
 * <p>With {@code n} units and {@code R = sum y / sum x}: {@code variance = n / (n - 1) sum (y - R x)^2 / (sum x)^2}, the
 * same as {@code (s_yy - 2 R s_xy + R^2 s_xx) / (n mean(x)^2)} with divisors {@code n - 1}. A unit that outweighs all others
 * makes the terms cancel, so the sum of squares is formed exactly, as {@code (S_yy S_x^2 - 2 S_y S_x S_xy + S_y^2 S_xx) /
 * S_x^2} in whole numbers. Relative error of both values below 1e-15.
 *
 * @param ratio sum of numerators over sum of denominators
 * @param variance 0 or more; 0 exactly if every unit has this ratio
 */
public record RatioEstimate(double ratio, double variance) {

    public RatioEstimate {
        if (!(StrictMath.abs(ratio) < Double.POSITIVE_INFINITY)) {
            throw new IllegalArgumentException("ratio: " + ratio + " (expected: finite)");
        }
        if (!(variance >= 0 && variance < Double.POSITIVE_INFINITY)) {
            throw new IllegalArgumentException("variance: " + variance + " (expected: 0 or more, finite)");
        }
    }

    /**
     * Estimates.
     *
     * @return empty while there are fewer than two units or all denominators are 0
     */
    public static Optional<RatioEstimate> of(UnitSums sums) {
        if (sums.units() < 2 || sums.denominator().signum() == 0) {
            return Optional.empty();
        }
        BigInteger x = sums.denominator();
        BigInteger y = sums.numerator();
        BigInteger squares = sums.numeratorSquares()
                .multiply(x)
                .multiply(x)
                .subtract(sums.products().multiply(x).multiply(y).shiftLeft(1))
                .add(sums.denominatorSquares().multiply(y).multiply(y));
        double n = sums.units();
        double square = x.multiply(x).doubleValue();
        return Optional.of(new RatioEstimate(
                y.doubleValue() / x.doubleValue(), n / (n - 1) * (squares.doubleValue() / square / square)));
    }
}
