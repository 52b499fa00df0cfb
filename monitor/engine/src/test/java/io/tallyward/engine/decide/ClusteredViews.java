package io.tallyward.engine.decide;

import io.tallyward.engine.count.WindowTally.Cell;
import java.util.ArrayList;
import java.util.List;
import java.util.Random;

/**
 * Units of two variants that come back: each has a propensity to click of its own, views the page a geometric number of times a
 * visit, and visits again the next day with probability one half. Knows nothing of how the engine adds up.
 */
final class ClusteredViews {

    /** Mean number of views a visit. */
    private static final double VIEWS_PER_VISIT = 3;

    private static final double RETURNS = 0.5;

    private final Random random;
    private final double rate;
    private final List<Unit> units = new ArrayList<>();

    /** @param rate mean propensity; that of a unit is a quarter of it or seven quarters */
    ClusteredViews(Random random, double rate) {
        this.random = random;
        this.rate = rate;
    }

    private static final class Unit {
        private final int epoch;
        private final int variant;
        private final double propensity;
        private long views;
        private long clicked;
        private boolean gone;

        private Unit(int epoch, int variant, double propensity) {
            this.epoch = epoch;
            this.variant = variant;
            this.propensity = propensity;
        }
    }

    /**
     * One more day.
     *
     * @param epoch the allocation epoch of who comes for the first time
     * @param arrivals who comes for the first time, by variant
     * @return by how much the day raised the sums over units
     */
    List<Cell> day(int epoch, int... arrivals) {
        int before = units.size();
        for (int variant = 0; variant < arrivals.length; variant++) {
            for (int i = 0; i < arrivals[variant]; i++) {
                units.add(new Unit(epoch, variant, rate * (random.nextBoolean() ? 0.25 : 1.75)));
            }
        }
        long[][][] sums = new long[epoch + 1][arrivals.length][6];
        for (int i = 0; i < units.size(); i++) {
            Unit unit = units.get(i);
            unit.gone |= i < before && random.nextDouble() >= RETURNS;
            if (!unit.gone) {
                visit(unit, i >= before, sums[unit.epoch][unit.variant]);
            }
        }
        List<Cell> cells = new ArrayList<>();
        for (int e = 0; e < sums.length; e++) {
            for (int variant = 0; variant < arrivals.length; variant++) {
                long[] s = sums[e][variant];
                if (s[1] > 0) {
                    cells.add(new Cell(e, variant, s[0], s[1], s[2], s[3], s[4], s[5]));
                }
            }
        }
        return cells;
    }

    private void visit(Unit unit, boolean first, long[] sums) {
        long x = unit.views;
        long y = unit.clicked;
        do {
            unit.views++;
            unit.clicked += random.nextDouble() < unit.propensity ? 1 : 0;
        } while (random.nextDouble() >= 1 / VIEWS_PER_VISIT);
        sums[0] += first ? 1 : 0;
        sums[1] += unit.views - x;
        sums[2] += unit.clicked - y;
        sums[3] += unit.views * unit.views - x * x;
        sums[4] += unit.views * unit.clicked - x * y;
        sums[5] += unit.clicked * unit.clicked - y * y;
    }
}
