package io.tallyward.statistics.ratio;

import java.math.BigInteger;

/**
 * The sums over units that a ratio metric needs: of {@code x}, the denominator of a unit (views), and of {@code y}, its
 * numerator (clicks). Exact, so {@link #plus} is associative and commutative to the last digit. An addition costs some
 * hundred nanoseconds; a unit that changes is taken out with {@link #minus} and put back in.
 *
 * @param units number of units, those with {@code x = 0} included
 * @param denominator sum of x; 0 or more
 * @param numerator sum of y
 * @param denominatorSquares sum of x^2
 * @param products sum of x y
 * @param numeratorSquares sum of y^2
 */
public record UnitSums(
        long units,
        BigInteger denominator,
        BigInteger numerator,
        BigInteger denominatorSquares,
        BigInteger products,
        BigInteger numeratorSquares) {

    /** Every number of a unit up to here is a double. */
    private static final long MOST = 1L << 53;

    private static final BigInteger MOST_SQUARED = BigInteger.ONE.shiftLeft(106);

    /** The neutral element of {@link #plus}. */
    public static final UnitSums NONE =
            new UnitSums(0, BigInteger.ZERO, BigInteger.ZERO, BigInteger.ZERO, BigInteger.ZERO, BigInteger.ZERO);

    /**
     * Sums as they were stored.
     *
     * @throws IllegalArgumentException if no units can have them: a sum of squares below what its sum asks for, or
     *     products beyond what both allow (Cauchy and Schwarz), or units or numbers of a unit out of range
     */
    public UnitSums {
        if (units < 0 || units > MOST) {
            throw new IllegalArgumentException("units: " + units + " (expected: in [0, 2^53])");
        }
        if (denominator.signum() < 0) {
            throw new IllegalArgumentException("denominator: " + denominator + " (expected: 0 or more)");
        }
        BigInteger n = BigInteger.valueOf(units);
        BigInteger x = spread("denominatorSquares", n, denominator, denominatorSquares);
        BigInteger y = spread("numeratorSquares", n, numerator, numeratorSquares);
        BigInteger together = n.multiply(products).subtract(denominator.multiply(numerator));
        boolean possible = together.multiply(together).compareTo(x.multiply(y)) <= 0;
        if (!possible || units == 0 && products.signum() != 0) {
            throw new IllegalArgumentException(
                    "products: " + products + " (expected: in keeping with the other sums, as no units have these)");
        }
    }

    /**
     * A single unit.
     *
     * @param denominator in [0, 2^53]
     * @param numerator in [-2^53, 2^53]; negative for what was taken back
     */
    public static UnitSums ofUnit(long denominator, long numerator) {
        if (denominator < 0 || denominator > MOST) {
            throw new IllegalArgumentException("denominator: " + denominator + " (expected: in [0, 2^53])");
        }
        if (numerator < -MOST || numerator > MOST) {
            throw new IllegalArgumentException("numerator: " + numerator + " (expected: in [-2^53, 2^53])");
        }
        BigInteger x = BigInteger.valueOf(denominator);
        BigInteger y = BigInteger.valueOf(numerator);
        return new UnitSums(1, x, y, x.multiply(x), x.multiply(y), y.multiply(y));
    }

    /**
     * The sums over the units of both.
     *
     * @throws IllegalArgumentException if there are more than 2^53 units in all
     */
    public UnitSums plus(UnitSums other) {
        return new UnitSums(
                units + other.units,
                denominator.add(other.denominator),
                numerator.add(other.numerator),
                denominatorSquares.add(other.denominatorSquares),
                products.add(other.products),
                numeratorSquares.add(other.numeratorSquares));
    }

    /**
     * The sums without the units of the other.
     *
     * @throws IllegalArgumentException if the other's units cannot be among these
     */
    public UnitSums minus(UnitSums other) {
        return new UnitSums(
                units - other.units,
                denominator.subtract(other.denominator),
                numerator.subtract(other.numerator),
                denominatorSquares.subtract(other.denominatorSquares),
                products.subtract(other.products),
                numeratorSquares.subtract(other.numeratorSquares));
    }

    /** {@code n sum v^2 - (sum v)^2}. */
    private static BigInteger spread(String name, BigInteger n, BigInteger sum, BigInteger squares) {
        BigInteger spread = n.multiply(squares).subtract(sum.multiply(sum));
        boolean none = n.signum() == 0 && sum.signum() != 0;
        if (spread.signum() < 0 || none || squares.compareTo(n.multiply(MOST_SQUARED)) > 0) {
            throw new IllegalArgumentException(name + ": " + squares + " (expected: from the square of the sum " + sum
                    + " over units " + n + " to 2^106 times units)");
        }
        return spread;
    }
}
