package io.tallyward.statistics.inference;

import io.tallyward.statistics.boundary.Look;

/**
 * An interval that may be read at every look, whether the test stops or not: over all looks together, the probability that
 * any of them misses the true drift is at most what the boundaries spend. Jennison and Turnbull, "Interim analyses: the
 * repeated confidence interval approach", JRSS B 51 (1989) 305-361, recalled.
 *
 * <p>At a look with information t and boundaries l, u: {@code ((z - u) / sqrt t, (z - l) / sqrt t)}, for symmetric
 * boundaries {@code (z -/+ u) / sqrt t}. It leaves out 0 exactly if z is beyond a boundary. Wider than the interval that
 * {@link StagewiseInference} gives after a stop, as it does not assume that the boundaries were obeyed.
 */
public final class RepeatedInterval {

    private RepeatedInterval() {}

    /**
     * The interval for the drift at a look.
     *
     * @param look the look, with the boundaries it had; a side without boundary leaves the other end open
     * @param z the statistic at the look, in [-1e6, 1e6]
     * @param level 1 minus the error of all looks, both tails together, in (0, 1); reported, not used
     */
    public static Interval at(Look look, double z, double level) {
        StagewiseInference.requireStatistic(z);
        double root = StrictMath.sqrt(look.information());
        return new Interval((z - look.upper()) / root, (z - look.lower()) / root, level);
    }
}
