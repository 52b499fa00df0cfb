package io.tallyward.statistics.boundary;

import io.tallyward.statistics.distribution.Normal;

/**
 * The distribution of a path that has not stopped yet, carried from look to look.
 *
 * <p>State after k looks: masses on quadrature nodes of the Brownian scale {@code x = z sqrt(t)}. The next statistic has
 * density {@code sum m_j phi((x - x_j - drift d) / sqrt d)}, {@code d} being the step of information. The nodes of a look
 * are laid out only when the next look's information is known, because the finer of the two adjacent steps sets their
 * spacing; they are then a pure function of the looks.
 *
 * <p>Not thread-safe.
 */
final class ContinuationDensity {

    /** An unbounded side is cut this many standard deviations out: 1e-23 of the mass, far below what is asked for. */
    static final double TRUNCATION = 10;

    /** No density is left this far out in double precision, so nodes end here, boundary or not. */
    private static final double FARTHEST = 42;

    /** Kernel values below {@code exp(-KERNEL_REACH^2/2)} of the peak, about 2e-19, are skipped. */
    private static final double KERNEL_REACH = 9.3;

    /** Below this, sums over tails are not trusted and only tell that {@code z} is too far out. */
    private static final double UNDERFLOW = 1e-300;

    /** Newton doubles the digits: a last move this small leaves an error far below 1e-14. */
    private static final double CLOSE = 1e-9;

    /** Some ten steps are usual; so many mean that there is no solution. */
    private static final int MOST_STEPS = 200;

    private final double drift;
    private int looks;

    /** The last look. */
    private double information;

    private double lower = Double.NEGATIVE_INFINITY;
    private double upper = Double.POSITIVE_INFINITY;

    /** Whether the nodes are those of the last look already. */
    private boolean settled = true;

    /** Information of the look that the nodes belong to; 0 before the first. */
    private double origin;

    private double[] nodes = {0};
    private double[] masses = {1};

    ContinuationDensity(double drift) {
        this.drift = drift;
    }

    int looks() {
        return looks;
    }

    double information() {
        return information;
    }

    /** The nodes on the Brownian scale, ascending; not to be changed. */
    double[] nodes() {
        return nodes;
    }

    /** The masses, one per node; not to be changed. */
    double[] masses() {
        return masses;
    }

    /** Records the boundaries of a look; its nodes follow once the next look is known. */
    void stop(double at, double lowerBoundary, double upperBoundary) {
        information = at;
        lower = lowerBoundary;
        upper = upperBoundary;
        looks++;
        settled = false;
    }

    /**
     * Lays out the nodes of the last look, now that the next one's information is known. Does nothing a second time.
     *
     * @param next information of the next look
     * @param lowerReach standard deviations to keep below the mean where there is no lower boundary
     * @param upperReach likewise above
     */
    void approach(double next, double lowerReach, double upperReach) {
        if (settled) {
            return;
        }
        double root = StrictMath.sqrt(information);
        double mean = drift * root;
        double below = Double.isInfinite(lower) ? StrictMath.min(lowerReach, FARTHEST) : FARTHEST;
        double above = Double.isInfinite(upper) ? StrictMath.min(upperReach, FARTHEST) : FARTHEST;
        double from = StrictMath.max(lower, StrictMath.min(mean, 0) - below);
        double to = StrictMath.min(upper, StrictMath.max(mean, 0) + above);
        double step = origin > 0 ? StrictMath.min(information - origin, next - information) : next - information;
        double finest = StrictMath.min(1, StrictMath.sqrt(step / information));
        Quadrature rule = Quadrature.over(from, to, finest).scaled(root);
        smear(rule.points(), rule.weights());
        nodes = rule.points();
        masses = rule.weights();
        origin = information;
        settled = true;
    }

    /** Turns quadrature weights into masses: multiplies each by the density at its point. */
    private void smear(double[] x, double[] m) {
        if (x.length == 0) {
            return;
        }
        double step = information - origin;
        double exponent = -0.5 / step;
        double peak = 1 / StrictMath.sqrt(2 * StrictMath.PI * step);
        double outermost = StrictMath.max(StrictMath.abs(x[0]), StrictMath.abs(x[x.length - 1]));
        // What arrives far out has, most likely, come a part of the way in this one step: the band is wider by that
        // part.
        double band = KERNEL_REACH * StrictMath.sqrt(step) + (outermost / information + StrictMath.abs(drift)) * step;
        int first = 0;
        int last = 0;
        for (int i = 0; i < x.length; i++) {
            double centre = x[i] - drift * step;
            while (first < nodes.length && nodes[first] < centre - band) {
                first++;
            }
            while (last < nodes.length && nodes[last] <= centre + band) {
                last++;
            }
            double sum = 0;
            for (int j = first; j < last; j++) {
                double gap = centre - nodes[j];
                sum += masses[j] * StrictMath.exp(exponent * gap * gap);
            }
            m[i] *= peak * sum;
        }
    }

    /** Probability of not having stopped at any look up to the one the nodes belong to. */
    double running() {
        double sum = 0;
        for (double mass : masses) {
            sum += mass;
        }
        return sum;
    }

    /** Probability of reaching the next look and being at {@code z} or above there. */
    double above(double next, double z) {
        return tail(next, z, 1);
    }

    /** Probability of reaching the next look and being at {@code z} or below there. */
    double below(double next, double z) {
        return tail(next, z, -1);
    }

    /** The z exceeded with probability {@code target} at the next look; infinite for a target of 0. */
    double upperBoundary(double next, double target) {
        return solve(next, target, 1);
    }

    /** The z fallen short of with probability {@code target} at the next look; infinite for a target of 0. */
    double lowerBoundary(double next, double target) {
        return solve(next, target, -1);
    }

    private double tail(double next, double z, int sign) {
        if (Double.isInfinite(z)) {
            return z * sign > 0 ? 0 : running();
        }
        double step = next - origin;
        double root = StrictMath.sqrt(step);
        double at = z * StrictMath.sqrt(next) - drift * step;
        double sum = 0;
        for (int j = 0; j < nodes.length; j++) {
            sum += masses[j] * Normal.survival(sign * (at - nodes[j]) / root);
        }
        return sum;
    }

    private double density(double next, double z) {
        double step = next - origin;
        double root = StrictMath.sqrt(step);
        double at = z * StrictMath.sqrt(next) - drift * step;
        double sum = 0;
        for (int j = 0; j < nodes.length; j++) {
            sum += masses[j] * Normal.density((at - nodes[j]) / root);
        }
        return sum * StrictMath.sqrt(next / step);
    }

    /**
     * Newton's method on the logarithm of the tail. The sub-density of z is log-concave (a Gaussian, truncated and
     * convolved with a Gaussian, over and over), so the log tail is concave and Newton closes in from the far side
     * without overshooting. Bisection steps in only where the tail is too small to be represented.
     */
    private double solve(double next, double target, int sign) {
        if (!(target > 0)) {
            return sign * Double.POSITIVE_INFINITY;
        }
        double z = farSide(next, target, sign);
        if (looks == 0) {
            return z;
        }
        double logTarget = StrictMath.log(target);
        double outer = z;
        double inner = Double.NaN;
        for (int i = 0; i < MOST_STEPS; i++) {
            double p = tail(next, z, sign);
            double density = density(next, z);
            double move = (StrictMath.log(p) - logTarget) * (p / density);
            if (StrictMath.abs(move) < CLOSE) {
                return z + sign * move;
            }
            if (p > target) {
                inner = z;
            } else {
                outer = z;
            }
            z += sign * move;
            if (p < UNDERFLOW || density < UNDERFLOW) {
                z = Double.isNaN(inner) ? outer - sign : 0.5 * (inner + outer);
            } else if (sign * (z - outer) > 0) {
                z = 0.5 * (inner + outer);
            }
        }
        throw new IllegalArgumentException("target: " + target + " at information " + next
                + " (expected: below the probability " + running() + " of still running)");
    }

    /**
     * A z whose tail is no larger than the target: the nearer of the quantile of a path that was never stopped, and the
     * quantile of one that starts at the very edge of the last look's continuation region.
     */
    private double farSide(double next, double target, int sign) {
        double quantile = sign * Normal.upperQuantile(target);
        double free = drift * StrictMath.sqrt(next) + quantile;
        double edge = sign > 0 ? upper : lower;
        if (Double.isInfinite(edge)) {
            return free;
        }
        double step = next - origin;
        double fromEdge = (edge * StrictMath.sqrt(origin) + drift * step + quantile * StrictMath.sqrt(step))
                / StrictMath.sqrt(next);
        return sign > 0 ? StrictMath.min(free, fromEdge) : StrictMath.max(free, fromEdge);
    }
}
