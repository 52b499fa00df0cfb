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

    /**
     * Unbounded sides are cut this many standard deviations out (1e-23 of the mass), or farther if the next look asks
     * about smaller probabilities.
     */
    static final double TRUNCATION = 10;

    /** Boundaries farther out than this cut off less than the smallest double: nodes end here. */
    private static final double FARTHEST = 42;

    /** Kernel values below {@code exp(-KERNEL_REACH^2/2)}, about 1e-19, of the peak are skipped. */
    private static final double KERNEL_REACH = 9.3;

    private final double drift;
    private int looks;
    private double information;
    private double lower;
    private double upper;
    private boolean settled;

    /** Information of the look that {@link #nodes} belong to; 0 before the first. */
    private double origin;

    private double[] nodes = {0};
    private double[] masses = {1};

    ContinuationDensity(double drift) {
        this.drift = drift;
        this.settled = true;
    }

    double information() {
        return information;
    }

    int looks() {
        return looks;
    }

    double[] nodes() {
        return nodes;
    }

    double[] masses() {
        return masses;
    }

    /**
     * Lays out the nodes of the last look, now that the next one's information is known.
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
        double from = StrictMath.max(lower, StrictMath.min(mean, 0) - StrictMath.min(lowerReach, FARTHEST));
        double to = StrictMath.min(upper, StrictMath.max(mean, 0) + StrictMath.min(upperReach, FARTHEST));
        if (lower > Double.NEGATIVE_INFINITY) {
            from = StrictMath.max(lower, StrictMath.min(mean, 0) - FARTHEST);
        }
        if (upper < Double.POSITIVE_INFINITY) {
            to = StrictMath.min(upper, StrictMath.max(mean, 0) + FARTHEST);
        }
        double finest = StrictMath.min(1, StrictMath.sqrt((next - information) / information));
        if (origin > 0) {
            finest = StrictMath.min(finest, StrictMath.sqrt((information - origin) / information));
        }
        Quadrature rule = Quadrature.over(from, to, finest);
        double[] x = rule.points();
        double[] m = rule.weights();
        for (int i = 0; i < x.length; i++) {
            x[i] *= root;
            m[i] *= root;
        }
        smear(x, m);
        nodes = x;
        masses = m;
        origin = information;
        settled = true;
    }

    /** Turns quadrature weights into masses: multiplies each by the density at its point. */
    private void smear(double[] x, double[] m) {
        if (x.length == 0) {
            return;
        }
        double step = information - origin;
        double scale = -0.5 / step;
        double factor = 1 / StrictMath.sqrt(2 * StrictMath.PI * step);
        double outermost = StrictMath.max(StrictMath.abs(x[0]), StrictMath.abs(x[x.length - 1]));
        // Far out, the mass that arrives comes from far out too: the band must be wider by what the path drifts back.
        double band = KERNEL_REACH * StrictMath.sqrt(step) + (outermost / information + StrictMath.abs(drift)) * step;
        int first = 0;
        int last = 0;
        for (int i = 0; i < x.length; i++) {
            double centre = x[i] - drift * step;
            while (first < nodes.length && nodes[first] < centre - band) {
                first++;
            }
            last = StrictMath.max(last, first);
            while (last < nodes.length && nodes[last] <= centre + band) {
                last++;
            }
            double sum = 0;
            for (int j = first; j < last; j++) {
                double gap = centre - nodes[j];
                sum += masses[j] * StrictMath.exp(scale * gap * gap);
            }
            m[i] *= factor * sum;
        }
    }

    /** Records the boundaries of a look; its nodes follow once the next look is known. */
    void stop(double at, double lowerBoundary, double upperBoundary) {
        information = at;
        lower = lowerBoundary;
        upper = upperBoundary;
        looks++;
        settled = false;
    }

    /** Probability of reaching the next look and being at {@code z} or above there. */
    double above(double next, double z) {
        return tail(next, z, 1);
    }

    /** Probability of reaching the next look and being at {@code z} or below there. */
    double below(double next, double z) {
        return tail(next, z, -1);
    }

    private double tail(double next, double z, int sign) {
        if (StrictMath.abs(z) == Double.POSITIVE_INFINITY) {
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

    /** Probability of not having stopped at any look so far. */
    double running() {
        double sum = 0;
        for (double mass : masses) {
            sum += mass;
        }
        return sum;
    }

    /** Density of z at the next look over the paths that reach it. */
    double density(double next, double z) {
        double step = next - origin;
        double root = StrictMath.sqrt(step);
        double at = z * StrictMath.sqrt(next) - drift * step;
        double sum = 0;
        for (int j = 0; j < nodes.length; j++) {
            sum += masses[j] * Normal.density((at - nodes[j]) / root);
        }
        return sum * StrictMath.sqrt(next / step);
    }

    /** The z exceeded with probability {@code target} at the next look; infinite for a target of 0. */
    double upperBoundary(double next, double target) {
        return solve(next, target, 1);
    }

    /** The z fallen short of with probability {@code target} at the next look; infinite for a target of 0. */
    double lowerBoundary(double next, double target) {
        return solve(next, target, -1);
    }

    /**
     * Newton's method on the logarithm of the tail. The sub-density of z is log-concave (a Gaussian convolved with a
     * truncated Gaussian, over and over), so the log tail is concave and Newton closes in from the far side without ever
     * overshooting. The start, the quantile of a path that was never stopped, lies on that side.
     */
    private double solve(double next, double target, int sign) {
        if (!(target > 0)) {
            return sign * Double.POSITIVE_INFINITY;
        }
        double mean = drift * StrictMath.sqrt(next);
        double z = mean + sign * Normal.upperQuantile(target);
        if (looks == 0) {
            return z;
        }
        double logTarget = StrictMath.log(target);
        for (int i = 0; i < MOST_STEPS; i++) {
            double p = tail(next, z, sign);
            double density = density(next, z);
            if (p < UNDERFLOW || density < UNDERFLOW) {
                z -= sign;
                continue;
            }
            double move = (StrictMath.log(p) - logTarget) * (p / density);
            z += sign * move;
            if (StrictMath.abs(move) < CLOSE) {
                return z;
            }
        }
        throw new IllegalStateException("target: " + target + " at information " + next
                + " (expected: below the probability " + running() + " of still running)");
    }

    /** Below this, logarithms of tail sums are not trusted; one standard deviation inwards is tried instead. */
    private static final double UNDERFLOW = 1e-300;

    /** Newton doubles the digits: a last move this small leaves an error far below 1e-14. */
    private static final double CLOSE = 1e-9;

    /** Some ten steps are usual; a hundred mean that there is no solution. */
    private static final int MOST_STEPS = 100;
}
