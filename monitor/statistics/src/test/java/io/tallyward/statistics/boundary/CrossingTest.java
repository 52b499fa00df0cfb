package io.tallyward.statistics.boundary;

import static org.junit.jupiter.api.Assertions.assertEquals;

import io.tallyward.statistics.distribution.Normal;
import java.util.Random;
import org.junit.jupiter.api.Test;

/** Against plain sums over all nodes. */
class CrossingTest {

    private static final long SEED = 93;

    /** Relative, for sums without cancellation. */
    private static final double SUM = 1e-14;

    /** Relative, times the square of how far the nearest node is off: what rounding that distance does to a tail. */
    private static final double FAR = 3e-16;

    /** Times all mass; densities and slopes of nodes beyond the boundary by more than the kernel's reach are left out. */
    private static final double SKIPPED = 1e-18;

    private final Crossing crossing = new Crossing();

    @Test
    void agreesWithPlainSumsOnEitherSide() {
        Random random = new Random(SEED);
        for (int run = 0; run < 500; run++) {
            double root = 0.01 + random.nextDouble();
            Quadrature rule = Quadrature.over(-3, 0.1 + 4 * random.nextDouble(), root);
            int side = random.nextBoolean() ? 1 : -1;
            double at = 12 * (random.nextDouble() - 0.5);
            double tilt = random.nextInt(3) == 0 ? 0 : 4 * (random.nextDouble() - 0.5);
            assertAgrees(rule, at, root, side, tilt, "seed " + SEED + ", run " + run + ", at " + at);
        }
    }

    private void assertAgrees(Quadrature rule, double at, double root, int side, double tilt, String where) {
        double offset = 0.3;
        double tail = 0;
        double density = 0;
        double slope = 0;
        double steepness = 0;
        double moment = 0;
        double nearest = Double.POSITIVE_INFINITY;
        double all = 0;
        for (int j = 0; j < rule.points().length; j++) {
            double x = rule.points()[j];
            double mass = rule.weights()[j] * (tilt == 0 ? 1 : Math.exp(tilt * x + offset));
            double u = side * (at - x) / root;
            nearest = Math.min(nearest, u);
            all += mass;
            tail += mass * Normal.survival(u);
            moment += mass * x * Normal.survival(u);
            density += mass * Normal.density(u);
            slope -= mass * u * Normal.density(u);
            steepness += mass * Math.abs(u) * Normal.density(u);
        }
        crossing.sum(rule.points(), rule.weights(), at, root, side, Math.abs(tilt) * root, tilt, offset);
        double relative = Math.max(SUM, FAR * nearest * Math.abs(nearest));
        assertEquals(tail, crossing.tail(), relative * tail, where);
        assertEquals(density, crossing.density(), relative * density + SKIPPED * all, where);
        assertEquals(slope, crossing.slope(), relative * steepness + SKIPPED * all, where);
        // Nodes reach to 4.1 at most.
        assertEquals(moment, crossing.moment(), 4.1 * relative * tail, where);
    }

    @Test
    void isAllOrNothingForABoundaryOutOfReach() {
        double[] nodes = {-1, 0.5};
        double[] masses = {0.25, 0.5};
        for (double far : new double[] {1e3, 1e300, Double.POSITIVE_INFINITY}) {
            crossing.sum(nodes, masses, far, 0.1, 1, far);
            assertEquals(0, crossing.tail());
            assertEquals(0, crossing.moment());
            crossing.sum(nodes, masses, far, 0.1, -1, far);
            assertEquals(0.75, crossing.tail());
            assertEquals(0, crossing.density());
            assertEquals(0, crossing.moment());
        }
        crossing.sum(new double[0], new double[0], 1, 0.1, 1, 0);
        assertEquals(0, crossing.tail());
    }
}
