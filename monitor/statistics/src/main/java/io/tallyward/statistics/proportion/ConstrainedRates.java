package io.tallyward.statistics.proportion;

import java.math.BigInteger;

/**
 * The most likely pair of rates that differ by a given amount, and the variance of the difference there.
 *
 * <p>The usual closed form solves a cubic by trigonometry (Miettinen and Nurminen 1985, appendix) and loses half its
 * digits for large counts or rates near 0 or 1. Here the likelihood equation itself is solved, as a decreasing function
 * of the rate whose terms are all positive; the rate is measured from the nearer end of its range, so that a rate of 1e-12
 * and a failure rate of 1e-12 are found equally well.
 */
final class ConstrainedRates {

    /** Bisection ends when no double is left in between; this many halvings get there from anywhere that matters. */
    private static final int MOST_HALVINGS = 200;

    /** Newton takes ten steps or so; only a rate many orders of magnitude below the others takes up to a hundred. */
    private static final int MOST_STEPS = 200;

    /** Relative; the variance then has an error of a few roundings. */
    private static final double CLOSE = 4e-15;

    private final double x1;
    private final double y1;
    private final double x0;
    private final double y0;

    /** Counts of successes x and failures y, variant (1) and control (0). */
    private ConstrainedRates(double x1, double y1, double x0, double y0) {
        this.x1 = x1;
        this.y1 = y1;
        this.x0 = x0;
        this.y0 = y0;
    }

    /**
     * How far above the observed difference the true one may lie: the {@code e} with {@code e = z sqrt(V(d + e) N / (N -
     * 1))}.
     */
    static double reach(Stratum stratum, double z) {
        double n1 = stratum.trials();
        double n0 = stratum.controlTrials();
        ConstrainedRates rates = new ConstrainedRates(
                stratum.successes(),
                n1 - stratum.successes(),
                stratum.controlSuccesses(),
                n0 - stratum.controlSuccesses());
        double squares = z * z * ((n1 + n0) / (n1 + n0 - 1));
        double difference = StratifiedComparison.crossDifference(stratum) / (n1 * n0);
        double roomAbove = room(stratum);
        double roomBelow = room(ScoreInterval.swapped(stratum));
        double from = 0;
        double to = roomAbove;
        for (int i = 0; i < MOST_HALVINGS; i++) {
            double middle = 0.5 * (from + to);
            if (middle <= from || middle >= to) {
                break;
            }
            double variance = rates.variance(difference + middle, roomAbove - middle, roomBelow + middle);
            if (middle * middle > squares * variance) {
                to = middle;
            } else {
                from = middle;
            }
        }
        return to;
    }

    /**
     * The variance of the difference at the most likely rates that differ by {@code d}.
     *
     * @param stratum with trials in both arms
     * @param d in (-1, 1)
     */
    static double variance(Stratum stratum, double d) {
        return variance(
                stratum.successes(),
                (double) stratum.trials() - stratum.successes(),
                stratum.controlSuccesses(),
                (double) stratum.controlTrials() - stratum.controlSuccesses(),
                d);
    }

    /** Likewise, for successes x and failures y that are expected and need not be whole. */
    static double variance(double x1, double y1, double x0, double y0, double d) {
        return new ConstrainedRates(x1, y1, x0, y0).variance(d, 1 - d, 1 + d);
    }

    /** One minus the observed difference, rounded once. */
    private static double room(Stratum stratum) {
        BigInteger n1 = BigInteger.valueOf(stratum.trials());
        BigInteger n0 = BigInteger.valueOf(stratum.controlTrials());
        BigInteger x0 = BigInteger.valueOf(stratum.controlSuccesses());
        BigInteger failures = BigInteger.valueOf(stratum.trials() - stratum.successes());
        return failures.multiply(n0).add(x0.multiply(n1)).doubleValue() / (n1.doubleValue() * n0.doubleValue());
    }

    /**
     * The variance of the difference.
     *
     * @param d the difference
     * @param above {@code 1 - d}, computed without cancellation
     * @param below {@code 1 + d}, likewise
     */
    private double variance(double d, double above, double below) {
        return d >= 0 ? varianceUpwards(d, above) : new ConstrainedRates(x0, y0, x1, y1).varianceUpwards(-d, below);
    }

    /** For {@code d >= 0}: the control has rate t and the variant t + d, with t in [0, width] and width = 1 - d. */
    private double varianceUpwards(double d, double width) {
        if (!(width > 0)) {
            return 0;
        }
        return slope(0.5 * width, d, width) <= 0
                ? varianceInLowerHalf(d, width)
                : new ConstrainedRates(y0, x0, y1, x1).varianceInLowerHalf(d, width);
    }

    private double varianceInLowerHalf(double d, double width) {
        double t = lowerRate(d, width);
        return (t + d) * (width - t) / (x1 + y1) + t * (width - t + d) / (x0 + y0);
    }

    /** The derivative of the log likelihood by t, decreasing in t. */
    private double slope(double t, double d, double width) {
        return over(x1, t + d) + over(x0, t) - over(y1, width - t) - over(y0, width - t + d);
    }

    private double bend(double t, double d, double width) {
        return -(over(x1 / (t + d), t + d)
                + over(x0 / t, t)
                + over(y1 / (width - t), width - t)
                + over(y0 / (width - t + d), width - t + d));
    }

    /** Nothing over nothing is nothing here: no count, no term. */
    private static double over(double count, double rate) {
        return count == 0 ? 0 : count / rate;
    }

    /** The root in [0, width/2] by Newton's method, fenced in. */
    private double lowerRate(double d, double width) {
        if (slope(0, d, width) <= 0) {
            return 0;
        }
        double from = 0;
        double to = 0.5 * width;
        double t = to;
        for (int i = 0; i < MOST_STEPS; i++) {
            double slope = slope(t, d, width);
            if (slope > 0) {
                from = t;
            } else {
                to = t;
            }
            double next = t - slope / bend(t, d, width);
            if (!(next > from && next < to)) {
                next = 0.5 * (from + to);
            }
            double move = StrictMath.abs(next - t);
            t = next;
            if (move <= CLOSE * t) {
                break;
            }
        }
        return t;
    }
}
