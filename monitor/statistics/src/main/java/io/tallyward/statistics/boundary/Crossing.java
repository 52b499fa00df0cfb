package io.tallyward.statistics.boundary;

import io.tallyward.statistics.distribution.Normal;

/**
 * What of a density on nodes is beyond a boundary one step later, and how that changes. One call of the exponential
 * function serves every sum, and nodes from which the boundary is out of reach are not looked at.
 *
 * <p>With masses {@code m_j} at {@code x_j}, a boundary at {@code a} and {@code u_j = s (a - x_j) / sqrt d} for the side
 * {@code s} of +1 or -1: the tail is {@code sum m_j Phi(-u_j)}, the density {@code sum m_j phi(u_j)}, its slope
 * {@code -sum m_j u_j phi(u_j)}, both per standard deviation of the step, and the moment {@code sum m_j x_j Phi(-u_j)}. A
 * tilt {@code theta} first multiplies every mass by {@code exp(theta x_j + offset)}.
 *
 * <p>A tail's relative error is below 1e-14, or 3e-16 times the square of how far the nearest node is off if that is more. Mutable, not thread-safe: holds the last answer.
 */
final class Crossing {

    /** Kernel values below {@code exp(-KERNEL_REACH^2/2)} of the peak, about 2e-19, are skipped. */
    static final double KERNEL_REACH = 9.3;

    /** From here on the normal density is below the smallest double. */
    private static final double VANISHED = 38.7;

    private static final double ONE_OVER_ROOT_TWO_PI = 1 / StrictMath.sqrt(2 * StrictMath.PI);

    private double tail;
    private double density;
    private double slope;
    private double moment;

    /**
     * Sums over the nodes.
     *
     * @param nodes ascending
     * @param masses one per node
     * @param at the boundary, less what the drift adds on the way
     * @param root standard deviation of the step
     * @param side 1 for the tail above, -1 for the one below
     * @param lean how far the origin of what arrives at the boundary leans inwards, in standard deviations of the step
     */
    void sum(double[] nodes, double[] masses, double at, double root, int side, double lean) {
        sum(nodes, masses, at, root, side, lean, 0, 0);
    }

    /** As above, with masses tilted. */
    void sum(
            double[] nodes,
            double[] masses,
            double at,
            double root,
            int side,
            double lean,
            double tilt,
            double offset) {
        tail = 0;
        density = 0;
        slope = 0;
        moment = 0;
        int count = nodes.length;
        double perRoot = side / root;
        double cut = VANISHED;
        for (int i = 0; i < count; i++) {
            int j = side > 0 ? count - 1 - i : i;
            double x = nodes[j];
            double u = perRoot * (at - x);
            if (i == 0) {
                cut = StrictMath.min(VANISHED, StrictMath.max(u, 0) + KERNEL_REACH + lean);
            }
            if (u > cut) {
                return;
            }
            double mass = tilt == 0 ? masses[j] : masses[j] * StrictMath.exp(tilt * x + offset);
            add(x, mass, u);
        }
    }

    private void add(double x, double mass, double u) {
        double beyond = mass;
        if (u > -KERNEL_REACH) {
            double bell = mass * bell(u);
            double outside = bell * Normal.millsRatio(StrictMath.abs(u));
            beyond = u >= 0 ? outside : mass - outside;
            density += bell;
            slope -= u * bell;
        }
        tail += beyond;
        moment += beyond * x;
    }

    /** The normal density; what rounding the square has lost is made up for to first order. */
    private static double bell(double u) {
        double square = u * u;
        double lost = Math.fma(u, u, -square);
        return ONE_OVER_ROOT_TWO_PI * StrictMath.exp(-0.5 * square) * (1 - 0.5 * lost);
    }

    /** Probability of being beyond the boundary. */
    double tail() {
        return tail;
    }

    /** By how much the tail falls when the boundary moves outwards, per standard deviation of the step. */
    double density() {
        return density;
    }

    /** By how much the density grows when the boundary moves outwards, likewise. */
    double slope() {
        return slope;
    }

    /** The tail, each part times the position it came from. */
    double moment() {
        return moment;
    }
}
