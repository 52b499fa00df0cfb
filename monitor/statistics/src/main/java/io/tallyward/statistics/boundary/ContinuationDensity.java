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

    /** Below this, sums over tails are not trusted and only tell that {@code z} is too far out. */
    private static final double UNDERFLOW = 1e-300;

    /** Halley triples the digits: a last move this small, in standard deviations, leaves an error far below 1e-14. */
    private static final double CLOSE = 1e-5;

    /** Halley's correction at most doubles Newton's move: where it would do more, the model behind it is not to be trusted. */
    private static final double LEAST_DENOMINATOR = 0.5;

    /** Three steps are usual; so many mean that there is no solution. */
    private static final int MOST_STEPS = 200;

    private static final double[] START = {0};

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

    /** Where the masses are; null before the first look, when all is at 0. */
    private Quadrature nodes;

    private double[] masses = {1};

    /** Scratch space; nothing is carried over in it. */
    private final Crossing crossing = new Crossing();

    ContinuationDensity(double drift) {
        this.drift = drift;
    }

    /** An independent copy. Nodes and masses are replaced from look to look, never changed, and so can be shared. */
    ContinuationDensity copy() {
        ContinuationDensity copy = new ContinuationDensity(drift);
        copy.looks = looks;
        copy.information = information;
        copy.lower = lower;
        copy.upper = upper;
        copy.settled = settled;
        copy.origin = origin;
        copy.nodes = nodes;
        copy.masses = masses;
        return copy;
    }

    int looks() {
        return looks;
    }

    double information() {
        return information;
    }

    /** Where the masses are on the Brownian scale, ascending; not to be changed. */
    double[] points() {
        return nodes == null ? START : nodes.points();
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
        Quadrature rule = Quadrature.over(from * root, to * root, finest * root);
        masses = smear(rule);
        nodes = rule;
        origin = information;
        settled = true;
    }

    /** The masses at the points of a rule: its weights times the density there. */
    private double[] smear(Quadrature onto) {
        double[] x = onto.points();
        double[] smeared = new double[x.length];
        if (x.length == 0) {
            return smeared;
        }
        double step = information - origin;
        if (origin == 0) {
            for (int i = 0; i < x.length; i++) {
                double gap = x[i] - drift * step;
                smeared[i] = StrictMath.exp(-0.5 * gap * gap / step);
            }
        } else if (masses.length > 0) {
            double outermost = StrictMath.max(StrictMath.abs(x[0]), StrictMath.abs(x[x.length - 1]));
            double root = StrictMath.sqrt(step);
            double band = (Crossing.KERNEL_REACH + lean(outermost, information)) * root;
            PanelKernel kernel = new PanelKernel(nodes, masses, onto.half(), step);
            for (int panel = 0; panel < onto.panels(); panel++) {
                kernel.smear(onto.middle(panel) - drift * step, band, smeared, panel * Quadrature.POINTS);
            }
        }
        double peak = 1 / StrictMath.sqrt(2 * StrictMath.PI * step);
        for (int i = 0; i < x.length; i++) {
            smeared[i] *= peak * onto.weights()[i];
        }
        return smeared;
    }

    /**
     * What arrives far out has, most likely, come a part of the way in this one step: by how many of its standard
     * deviations, at most.
     */
    private double lean(double farthest, double next) {
        return (farthest / next + StrictMath.abs(drift)) * StrictMath.sqrt(next - origin);
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

    private double tail(double next, double z, int side) {
        if (Double.isInfinite(z)) {
            return z * side > 0 ? 0 : running();
        }
        cross(next, z, side);
        return crossing.tail();
    }

    private void cross(double next, double z, int side) {
        double step = next - origin;
        double at = z * StrictMath.sqrt(next);
        crossing.sum(points(), masses, at - drift * step, StrictMath.sqrt(step), side, lean(StrictMath.abs(at), next));
    }

    /**
     * Halley's method on the logarithm of the tail. The sub-density of z is log-concave (a Gaussian, truncated and
     * convolved with a Gaussian, over and over), so the log tail is concave: from the far side Newton's method closes in
     * without overshooting, and Halley's with what it knows of the bend. Bisection steps in where a move leaves the
     * bracket or the tail is too small to be represented.
     */
    private double solve(double next, double target, int side) {
        if (!(target > 0)) {
            return side * Double.POSITIVE_INFINITY;
        }
        double z = farSide(next, target, side);
        if (looks == 0) {
            return z;
        }
        double logTarget = StrictMath.log(target);
        double perDeviation = StrictMath.sqrt((next - origin) / next);
        double outer = z;
        double inner = Double.NaN;
        for (int i = 0; i < MOST_STEPS; i++) {
            cross(next, z, side);
            double tail = crossing.tail();
            boolean vanished = tail < UNDERFLOW || crossing.density() < UNDERFLOW;
            double move = vanished ? Double.NaN : halley(StrictMath.log(tail) - logTarget);
            if (StrictMath.abs(move) < CLOSE) {
                return z + side * move * perDeviation;
            }
            if (tail > target) {
                inner = z;
            } else {
                outer = z;
            }
            z += side * move * perDeviation;
            if (vanished && Double.isNaN(inner)) {
                z = outer - side;
            } else if (!(side * (z - outer) <= 0) || side * (z - inner) < 0) {
                z = 0.5 * (inner + outer);
            }
        }
        throw new IllegalArgumentException("target: " + target + " at information " + next
                + " (expected: below the probability " + running() + " of still running)");
    }

    /** How many standard deviations of the step the boundary must move outwards for the log tail to fall by so much. */
    private double halley(double surplus) {
        double hazard = crossing.density() / crossing.tail();
        double newton = surplus / hazard;
        double bend = crossing.slope() / crossing.density() + hazard;
        return newton / StrictMath.max(LEAST_DENOMINATOR, 1 + 0.5 * newton * bend);
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
