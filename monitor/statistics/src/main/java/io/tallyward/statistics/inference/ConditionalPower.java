package io.tallyward.statistics.inference;

import io.tallyward.statistics.boundary.BoundarySequence;
import io.tallyward.statistics.boundary.ExitProbabilities;
import io.tallyward.statistics.boundary.Look;
import java.util.List;

/**
 * How likely the remaining looks are to cross an upper boundary, given the statistic so far.
 *
 * <p>Given {@code Z = z} at information t, the score {@code z_j sqrt(t_j)} of a later look is normal about
 * {@code z sqrt(t) + theta (t_j - t)} with variance {@code t_j - t}, so {@code (u sqrt(t_j) - z sqrt(t) - theta (t_j - t)) /
 * sqrt(t_j - t)} is its boundary for a fresh path that starts now (Lan, Simon and Halperin, "Stochastically curtailed
 * testing in long-term clinical trials", Sequential Analysis 1 (1982) 207-219; Jennison and Turnbull, "Group Sequential
 * Methods", 2000, chapter 10; recalled).
 *
 * <p>Predictive power averages this over what the data say about the drift, {@code theta ~ N(z / sqrt t, 1 / t)} (flat prior;
 * Spiegelhalter, Freedman and Blackburn, "Monitoring clinical trials: conditional or predictive power?", Controlled
 * Clinical Trials 7 (1986) 8-17, recalled). No integral is needed: averaged, the later score minus its mean, times
 * {@code t / t_j}, is again a Brownian motion without drift, on the clock {@code t (1 - t / t_j)}, as its covariances are
 * {@code (t_i - t) t / t_i} for {@code t_i <= t_j}. On it the boundary is {@code (u sqrt(t) - z sqrt(t_j)) / sqrt(t_j - t)}.
 *
 * <p>Accuracy 1e-12 absolute. Immutable; thread-safe. An answer takes one pass over the remaining looks; predictive power
 * takes longer early on, as its clock runs ever slower.
 */
public final class ConditionalPower {

    /** Information relative to plan below this is a mistake in units. */
    private static final double LEAST = 1e-50;

    private final double information;
    private final double z;
    private final double[] remaining;
    private final double[] upper;
    private final double[] lower;

    private ConditionalPower(double information, double z, double[] remaining, double[] upper, double[] lower) {
        this.information = information;
        this.z = z;
        this.remaining = remaining;
        this.upper = upper;
        this.lower = lower;
    }

    /**
     * Prepares the answers.
     *
     * @param information information of the data so far relative to the planned maximum, in [1e-50, 1e6]
     * @param z the statistic so far, in [-1e6, 1e6]
     * @param remaining information of each remaining look, ascending from {@code information} by a millionth of itself at
     *     least, at most 1e6
     * @param upper upper boundary of each remaining look for z; positive infinity for none
     * @param lower boundary of each remaining look for z below which the test ends without success, for harm or futility;
     *     negative infinity for none
     */
    public static ConditionalPower of(
            double information, double z, double[] remaining, double[] upper, double[] lower) {
        StagewiseInference.requireStatistic(z);
        if (!(information >= LEAST && information <= BoundarySequence.MOST)) {
            throw new IllegalArgumentException(
                    "information: " + information + " (expected: in [" + LEAST + ", " + BoundarySequence.MOST + "])");
        }
        int looks = remaining.length;
        if (looks == 0 || upper.length != looks || lower.length != looks) {
            throw new IllegalArgumentException("remaining, upper, lower: " + looks + ", " + upper.length + ", "
                    + lower.length + " entries (expected: as many of each, at least one)");
        }
        double last = information;
        for (int j = 0; j < looks; j++) {
            requireAhead(j, remaining[j], last);
            if (!(lower[j] <= upper[j])) {
                throw new IllegalArgumentException(
                        "lower[" + j + "]: " + lower[j] + " (expected: at most upper[" + j + "], " + upper[j] + ")");
            }
            last = remaining[j];
        }
        return new ConditionalPower(information, z, remaining.clone(), upper.clone(), lower.clone());
    }

    /** As above, with the boundaries of planned looks. */
    public static ConditionalPower of(double information, double z, List<Look> remaining) {
        return of(
                information,
                z,
                remaining.stream().mapToDouble(Look::information).toArray(),
                remaining.stream().mapToDouble(Look::upper).toArray(),
                remaining.stream().mapToDouble(Look::lower).toArray());
    }

    /**
     * Probability of crossing an upper boundary at a remaining look, and no lower one before, under a drift.
     *
     * @param drift expected z at information 1, in [-1e100, 1e100]; the design's own for conditional power as planned
     */
    public double under(double drift) {
        StagewiseInference.requireDrift(drift);
        int looks = remaining.length;
        double last = remaining[looks - 1];
        double[] clock = new double[looks];
        double[] shift = new double[looks];
        double[] scale = new double[looks];
        for (int j = 0; j < looks; j++) {
            double ahead = remaining[j] - information;
            // Only relative to one another do times matter to a path without drift.
            clock[j] = ahead / last;
            scale[j] = StrictMath.sqrt(remaining[j] / ahead);
            shift[j] = z * StrictMath.sqrt(information / ahead) + drift * StrictMath.sqrt(ahead);
        }
        return crossing(clock, scale, shift);
    }

    /** Conditional power without an effect. */
    public double withoutEffect() {
        return under(0);
    }

    /** The drift that the data show so far, {@code z / sqrt t}; the naive estimate. */
    public double trend() {
        return z / StrictMath.sqrt(information);
    }

    /** Conditional power if the trend goes on. Swings more than the data warrant: it takes a noisy estimate for the truth. */
    public double underTrend() {
        return under(trend());
    }

    /**
     * Predictive power with a flat prior.
     *
     * @throws IllegalArgumentException if there is so little information so far that, on the slow clock of the prediction,
     *     remaining looks follow each other within a millionth
     */
    public double predictive() {
        int looks = remaining.length;
        double[] clock = new double[looks];
        double[] shift = new double[looks];
        double[] scale = new double[looks];
        double before = 0;
        for (int j = 0; j < looks; j++) {
            double ahead = remaining[j] - information;
            clock[j] = ahead / remaining[j];
            scale[j] = StrictMath.sqrt(information / ahead);
            shift[j] = z * StrictMath.sqrt(remaining[j] / ahead);
            if (!(clock[j] - before >= BoundarySequence.LEAST_GROWTH * clock[j])) {
                throw new IllegalArgumentException("information: " + information
                        + " (expected: enough to tell the prediction for remaining[" + j + "], " + remaining[j]
                        + ", from that for the look before)");
            }
            before = clock[j];
        }
        return crossing(clock, scale, shift);
    }

    /** Probability that a path without drift first crosses upwards; boundaries are {@code scale * bound - shift}. */
    private double crossing(double[] clock, double[] scale, double[] shift) {
        double[] high = new double[clock.length];
        double[] low = new double[clock.length];
        for (int j = 0; j < clock.length; j++) {
            high[j] = scale[j] * upper[j] - shift[j];
            low[j] = scale[j] * lower[j] - shift[j];
        }
        return StrictMath.min(1, ExitProbabilities.of(clock, high, low, 0).totalUpper());
    }

    private static void requireAhead(int j, double information, double last) {
        if (!(information - last >= BoundarySequence.LEAST_GROWTH * information
                && information <= BoundarySequence.MOST)) {
            throw new IllegalArgumentException("remaining[" + j + "]: " + information + " (expected: beyond " + last
                    + " by a millionth of itself at least, and at most " + BoundarySequence.MOST + ")");
        }
    }
}
