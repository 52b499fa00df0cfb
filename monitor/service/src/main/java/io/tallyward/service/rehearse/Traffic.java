package io.tallyward.service.rehearse;

import io.tallyward.engine.count.WindowTally.Cell;
import java.util.ArrayList;
import java.util.Arrays;
import java.util.List;
import java.util.random.RandomGenerator;

/**
 * The counts of one run, step by step: how many units arrive is fixed, to which variant each goes and whether it is a
 * success is chance, or, with a fixed split, the latter alone. A variant that is no longer shown leaves its units to the
 * others, in proportion to their shares. Not thread-safe.
 */
final class Traffic {

    private final RehearsedPlan rehearsed;
    private final double[] rates;
    private final boolean fixedSplit;
    private final RandomGenerator random;
    private final boolean[] shown;
    private final double[] owed;

    /**
     * The traffic of a run that has not begun.
     *
     * @param rates true success rate of each variant, in the plan's order
     * @param fixedSplit whether every step is split as planned, to a unit, instead of at random
     */
    Traffic(RehearsedPlan rehearsed, double[] rates, boolean fixedSplit, RandomGenerator random) {
        this.rehearsed = rehearsed;
        this.rates = rates;
        this.fixedSplit = fixedSplit;
        this.random = random;
        shown = new boolean[rates.length];
        Arrays.fill(shown, true);
        owed = new double[rates.length];
    }

    /** No longer shows a variant. */
    void leaveOut(int variant) {
        shown[variant] = false;
    }

    /** The counts of a step, 0 for the first. Steps are to be asked for in order. */
    List<Cell> step(int step) {
        long arrivals = rehearsed.arrivalsBefore(step + 1) - rehearsed.arrivalsBefore(step);
        int epoch = rehearsed.plan().epochAt(rehearsed.startMillis(step));
        double[] shares = sharesOfShown(epoch);
        long[] trials = fixedSplit ? planned(arrivals, shares) : drawn(arrivals, shares);
        List<Cell> cells = new ArrayList<>(rates.length);
        for (int variant = 0; variant < rates.length; variant++) {
            if (trials[variant] > 0) {
                long successes = BinomialSampler.draw(random, trials[variant], rates[variant]);
                cells.add(Cell.ofUnits(epoch, variant, trials[variant], successes));
            }
        }
        return cells;
    }

    private double[] sharesOfShown(int epoch) {
        double[] shares = rehearsed.plan().sharesIn(epoch);
        double sum = 0;
        for (int variant = 0; variant < shares.length; variant++) {
            shares[variant] = shown[variant] ? shares[variant] : 0;
            sum += shares[variant];
        }
        for (int variant = 0; variant < shares.length; variant++) {
            shares[variant] /= sum;
        }
        return shares;
    }

    /** A multinomial draw, one variant after the other from what the ones before have left. */
    private long[] drawn(long arrivals, double[] shares) {
        long[] trials = new long[shares.length];
        long units = arrivals;
        double share = 1;
        for (int variant = 0; variant < shares.length && units > 0; variant++) {
            boolean last = variant == lastShown();
            trials[variant] =
                    last ? units : BinomialSampler.draw(random, units, StrictMath.min(1, shares[variant] / share));
            units -= trials[variant];
            share -= shares[variant];
        }
        return trials;
    }

    private int lastShown() {
        int last = shown.length - 1;
        while (!shown[last]) {
            last--;
        }
        return last;
    }

    /** What each variant is owed, in whole units; what is left over goes to whoever is owed most. */
    private long[] planned(long arrivals, double[] shares) {
        long[] trials = new long[shares.length];
        long left = arrivals;
        for (int variant = 0; variant < shares.length; variant++) {
            owed[variant] += arrivals * shares[variant];
            trials[variant] = StrictMath.max(0, StrictMath.min(left, (long) StrictMath.floor(owed[variant])));
            owed[variant] -= trials[variant];
            left -= trials[variant];
        }
        for (; left > 0; left--) {
            int most = mostOwed();
            trials[most]++;
            owed[most]--;
        }
        return trials;
    }

    private int mostOwed() {
        int most = lastShown();
        for (int variant = 0; variant < owed.length; variant++) {
            if (shown[variant] && owed[variant] > owed[most]) {
                most = variant;
            }
        }
        return most;
    }
}
