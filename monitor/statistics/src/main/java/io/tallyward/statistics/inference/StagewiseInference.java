package io.tallyward.statistics.inference;

import io.tallyward.statistics.boundary.ExitProbabilities;
import io.tallyward.statistics.boundary.ExitProfile;
import io.tallyward.statistics.boundary.Look;
import io.tallyward.statistics.distribution.Normal;
import java.util.List;
import org.apache.commons.math3.analysis.UnivariateFunction;
import org.apache.commons.math3.analysis.solvers.BrentSolver;

/**
 * P-value, estimate and confidence interval after a sequential test has stopped, by the stage-wise ordering of its possible
 * ends: crossing the upper boundary at an earlier look is more extreme upwards than at a later one, crossing the lower
 * boundary earlier is more extreme downwards, and at the same look the larger z is more extreme upwards (Armitage 1957;
 * Siegmund 1978; Tsiatis, Rosner and Mehta, "Exact confidence intervals following a group sequential test", Biometrics 40
 * (1984) 797-803; Jennison and Turnbull, "Group Sequential Methods", 2000, sections 8.4 and 8.5; all recalled).
 *
 * <p>With a stop at look k and statistic z, and drift theta the expected z at information 1,
 * {@code G(theta) = sum over j < k of P(first crossing is upper, at j) + P(no crossing before k, Z_k >= z)}. It grows from 0
 * to 1 with theta. {@code G(0)} is the upper p-value, {@code G(theta) = 1/2} defines the median-unbiased estimate and
 * {@code G(theta) = (1 - level)/2} and {@code (1 + level)/2} the ends of the interval. Looks after the stop play no part, so
 * they need not be known.
 *
 * <p>Everything is exact for the boundaries <em>used</em>. They must be those that would really have ended the test:
 * non-binding futility bounds are left out. A test that ends before its last look without having crossed anything may be
 * described as if this had been its last look; whether that is fair depends on the reason for ending it.
 *
 * <p>Accuracy: probabilities 1e-12 absolute; drifts 1e-11 in units of the standard error of the stop, or 1e-14 of
 * themselves if that is more. The p-values take one pass over the looks, the estimate with its interval one more: some
 * hundred microseconds in all for a handful of looks, some milliseconds for 60, some tens for 168.
 *
 * <p>Immutable; thread-safe.
 */
public final class StagewiseInference {

    /** A statistic beyond this many standard deviations is a mistake in units. */
    public static final double MOST_Z = 1e6;

    /** A drift beyond this is a mistake in units. */
    public static final double MOST_DRIFT = 1e100;

    /** Of drifts, in standard errors. */
    private static final double ACCURACY = 1e-12;

    private static final double RELATIVE_ACCURACY = 1e-15;

    private static final int MOST_EVALUATIONS = 5000;

    /** Drifts this many standard errors around the naive one are served by one pass. */
    private static final double SPAN = 5;

    /** Without drift, what is farther out than this has a probability of 1e-15 for any drift within the span. */
    private static final double SPANNED = SPAN + 8;

    /** Four steps are usual; after an odd stop, which hardly any drift explains, the line bends too much for any number. */
    private static final int MOST_STEPS = 10;

    /** A quantile beyond this comes of a probability that hardly differs from 0 or 1 and says little of the way to go. */
    private static final double TRUSTED = 8;

    /** The error of Newton's method is below the square of the last step, in standard errors. */
    private static final double CLOSE = 1e-6;

    /** The estimate is usually within a standard error of the naive one; after an odd stop it may be far away. */
    private static final double WIDENING = 4;

    /** Quantiles are cut off here, where tail probabilities underflow. */
    private static final double FARTHEST = 40;

    /** Crossing an earlier boundary this far out has a probability of 1e-23 and is as good as impossible. */
    private static final double REACH = 10;

    /** An earlier boundary this much farther out than the stop adds to a p-value less than rounding does. */
    private static final double BEYOND = 4;

    private final double[] information;
    private final double[] upper;
    private final double[] lower;
    private final double z;
    private final double root;
    private final double pUpper;
    private final double pLower;

    private StagewiseInference(double[] information, double[] upper, double[] lower, double z) {
        this.information = information;
        this.upper = upper;
        this.lower = lower;
        this.z = z;
        this.root = StrictMath.sqrt(information[information.length - 1]);
        ExitProbabilities exits = exits(0);
        this.pUpper = StrictMath.min(1, exits.totalUpper());
        this.pLower = StrictMath.min(1, exits.totalLower());
    }

    /**
     * Describes a stop.
     *
     * @param looks the looks taken, in order; the test stopped at the last of them, whose own boundaries play no part
     * @param z the statistic at the stop, in [-1e6, 1e6], whether it crossed a boundary or not
     * @throws IllegalArgumentException if there is no look, if looks do not follow one another, if an earlier look leaves
     *     nothing between its boundaries, or if z is out of range
     */
    public static StagewiseInference of(List<Look> looks, double z) {
        if (looks.isEmpty()) {
            throw new IllegalArgumentException("looks: none (expected: at least the one at which the test stopped)");
        }
        requireStatistic(z);
        int last = looks.size() - 1;
        double[] information = new double[last + 1];
        double[] upper = new double[last + 1];
        double[] lower = new double[last + 1];
        for (int k = 0; k <= last; k++) {
            Look look = looks.get(k);
            if (look.number() != k + 1) {
                throw new IllegalArgumentException("looks[" + k + "].number: " + look.number() + " (expected: "
                        + (k + 1) + ", as every look taken counts)");
            }
            if (k < last && !(look.lower() < look.upper())) {
                throw new IllegalArgumentException("looks[" + k + "]: boundaries " + look.lower() + ", " + look.upper()
                        + " (expected: room between them, as the test went on)");
            }
            information[k] = look.information();
            upper[k] = k < last ? look.upper() : z;
            lower[k] = k < last ? look.lower() : z;
        }
        return new StagewiseInference(information, upper, lower, z);
    }

    /** Probability, without an effect, of an end at least as extreme upwards; small speaks for a positive drift. */
    public double pUpper() {
        return pUpper;
    }

    /** Probability, without an effect, of an end at least as extreme downwards; {@code 1 - pUpper()} but for rounding. */
    public double pLower() {
        return pLower;
    }

    /**
     * The p-value to report.
     *
     * @param twoSided whether both directions were tested: twice the smaller p-value, at most 1; otherwise the upper one
     */
    public double pReported(boolean twoSided) {
        return twoSided ? StrictMath.min(1, 2 * StrictMath.min(pUpper, pLower)) : pUpper;
    }

    /**
     * Probability of an end at least as extreme upwards under a drift: {@code G(drift)} above.
     *
     * @param drift expected z at information 1, in [-1e100, 1e100]
     */
    public double pUpper(double drift) {
        requireDrift(drift);
        return StrictMath.min(1, exits(drift).totalUpper());
    }

    /**
     * The drift read off the statistic as if there had been no earlier looks: {@code z / sqrt(t)}. Biased away from 0 when
     * the test stopped by crossing a boundary; to be shown only under that name.
     */
    public double naiveDrift() {
        return z / root;
    }

    /** The drift that is as likely to lie below the truth as above it, whatever the truth. */
    public double medianUnbiasedDrift() {
        return median(nearby());
    }

    /**
     * The confidence interval for the drift; it agrees with the test: it leaves out 0 exactly if the reported p-value is
     * small enough.
     *
     * @param level in (0, 1); {@code 1 - alpha} after a two-sided test, {@code 1 - 2 alpha} after a one-sided one
     */
    public Interval interval(double level) {
        Interval.requireLevel(level);
        return estimate(level).interval();
    }

    /** The median-unbiased drift with its interval at a level in (0, 1); both for little more than the price of one. */
    public Estimate estimate(double level) {
        Interval.requireLevel(level);
        ExitProfile nearby = nearby();
        double median = median(nearby);
        return new Estimate(median, interval(level, median, nearby));
    }

    private double median(ExitProfile nearby) {
        return drift(0, naiveDrift(), nearby);
    }

    private Interval interval(double level, double median, ExitProfile nearby) {
        double quantile = Normal.upperQuantile(0.5 * (1 - level));
        double from = drift(-quantile, median - quantile / root, nearby);
        double to = drift(quantile, median + quantile / root, nearby);
        // At a level next to nothing both ends are the median, and rounding decides which comes first.
        return new Interval(StrictMath.min(from, to), StrictMath.max(from, to), level);
    }

    /** A pass around the naive drift, to be re-weighted for drifts within the span. */
    private ExitProfile nearby() {
        double span = SPAN / root;
        double[][] bounds = moved(naiveDrift(), SPANNED);
        return ExitProfile.of(information, bounds[0], bounds[1], -span, span);
    }

    /**
     * The drift at which the probability of an end at least as extreme upwards is {@code Phi(quantile)}. Solved on the
     * scale of quantiles, where the probability of a single look is a straight line and that of several is nearly one.
     */
    private double drift(double quantile, double start, ExitProfile nearby) {
        if (information.length == 1) {
            return naiveDrift() + quantile / root;
        }
        double span = SPAN / root;
        double beyond = start - naiveDrift();
        for (int i = 0; i < MOST_STEPS && StrictMath.abs(beyond) <= span; i++) {
            // From the tail that is small at the end of the search.
            ExitProfile.Exit exit = quantile > 0 ? nearby.downward(beyond) : nearby.upward(beyond);
            double tail = Normal.quantile(StrictMath.max(0, StrictMath.min(1, exit.probability())));
            double move = (tail + StrictMath.abs(quantile)) * -Normal.density(tail) / exit.slope();
            if (!(StrictMath.abs(tail) < TRUSTED)) {
                break;
            }
            beyond += move;
            if (StrictMath.abs(move) * root < CLOSE) {
                return naiveDrift() + beyond;
            }
        }
        return bracketed(candidate -> quantile(candidate) - quantile, start);
    }

    private double bracketed(UnivariateFunction surplus, double start) {
        double atStart = surplus.value(start);
        if (atStart == 0) {
            return start;
        }
        double near = start;
        double far = start;
        double step = (atStart < 0 ? 1 : -1) / root;
        do {
            near = far;
            far += step;
            step *= WIDENING;
        } while (surplus.value(far) * atStart > 0);
        return new BrentSolver(RELATIVE_ACCURACY, ACCURACY / root, 0)
                .solve(MOST_EVALUATIONS, surplus, StrictMath.min(near, far), StrictMath.max(near, far));
    }

    private double quantile(double drift) {
        ExitProbabilities exits = exits(drift);
        return quantile(exits.totalUpper(), exits.totalLower());
    }

    /** The quantile of G, from whichever tail is the smaller. */
    private static double quantile(double above, double below) {
        double quantile = above < 0.5 ? Normal.quantile(above) : Normal.upperQuantile(StrictMath.min(1, below));
        return StrictMath.max(-FARTHEST, StrictMath.min(FARTHEST, quantile));
    }

    private ExitProbabilities exits(double drift) {
        double[][] bounds = moved(drift, StrictMath.max(REACH, StrictMath.abs(z - drift * root) + BEYOND));
        return ExitProbabilities.of(information, bounds[0], bounds[1], 0);
    }

    /**
     * The upper and the lower boundaries, moved with the drift instead of the path: that keeps the path where its nodes
     * are densest. Those that are farther out than anything that counts are pulled in, which costs nothing and spares
     * nodes.
     */
    private double[][] moved(double drift, double reach) {
        int looks = information.length;
        double[] high = new double[looks];
        double[] low = new double[looks];
        for (int k = 0; k < looks; k++) {
            double mean = drift * StrictMath.sqrt(information[k]);
            double farthest = k < looks - 1 ? StrictMath.min(FARTHEST, reach) : Double.POSITIVE_INFINITY;
            high[k] = StrictMath.max(-farthest, StrictMath.min(farthest, upper[k] - mean));
            low[k] = StrictMath.max(-farthest, StrictMath.min(farthest, lower[k] - mean));
        }
        return new double[][] {high, low};
    }

    static void requireStatistic(double z) {
        if (!(z >= -MOST_Z && z <= MOST_Z)) {
            throw new IllegalArgumentException("z: " + z + " (expected: in [" + -MOST_Z + ", " + MOST_Z + "])");
        }
    }

    static void requireDrift(double drift) {
        if (!(drift >= -MOST_DRIFT && drift <= MOST_DRIFT)) {
            throw new IllegalArgumentException(
                    "drift: " + drift + " (expected: in [" + -MOST_DRIFT + ", " + MOST_DRIFT + "])");
        }
    }
}
