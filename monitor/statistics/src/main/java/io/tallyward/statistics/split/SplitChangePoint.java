package io.tallyward.statistics.split;

import java.util.ArrayList;
import java.util.List;
import java.util.Optional;

/**
 * Where a mismatch of the split began: the window from which on free shares, constant from there, explain the counts best,
 * with the planned shares before it. The maximum-likelihood change point of a multinomial sequence; Hinkley and Hinkley,
 * "Inference about the change-point in a sequence of binomial variables", Biometrika 57 (1970) 477-488, for more than two
 * cells and known shares before (from memory).
 *
 * <p>With counts {@code n} summed from window {@code w} to the last and {@code N} their total, the log likelihood gained
 * over the planned shares {@code s} throughout is {@code sum n log(n / (N s))}; the window with the largest gain is taken,
 * the latest of several. Relative error of the gain below 1e-12 up to 1e9 counts; beyond, the rounding of {@code N s} shows
 * in a gain that is small.
 *
 * <p>This finds the place, not whether there is one: some window is always best. Ask it after a test has spoken. Without a
 * mismatch, twice the gain of any given window is chi-square with one degree of freedom less than cells, and the maximum
 * over windows is a little larger. It errs by few windows as soon as a window's own gain is a fraction of one.
 *
 * @param window number of the first window of the mismatch, from 0
 * @param logLikelihoodGain natural logarithm, 0 or more
 * @param sharesAfter shares observed from that window on; they add up to 1
 */
public record SplitChangePoint(int window, double logLikelihoodGain, List<Double> sharesAfter) {

    /** Totals up to here are doubles. */
    private static final long MOST = 1L << 53;

    public SplitChangePoint {
        if (window < 0) {
            throw new IllegalArgumentException("window: " + window + " (expected: 0 or more)");
        }
        if (!(logLikelihoodGain >= 0 && logLikelihoodGain < Double.POSITIVE_INFINITY)) {
            throw new IllegalArgumentException(
                    "logLikelihoodGain: " + logLikelihoodGain + " (expected: 0 or more, finite)");
        }
        sharesAfter = List.copyOf(sharesAfter);
        for (int i = 0; i < sharesAfter.size(); i++) {
            double share = sharesAfter.get(i);
            if (!(share >= 0 && share <= 1)) {
                throw new IllegalArgumentException("sharesAfter[" + i + "]: " + share + " (expected: in [0, 1])");
            }
        }
    }

    /**
     * Looks for the change. Cost grows with windows times cells.
     *
     * @param shares planned shares, positive, in any unit
     * @param windows counts of each window by cell, oldest first, at most 2^53 in all
     * @return empty while nothing is counted
     */
    public static Optional<SplitChangePoint> of(double[] shares, List<long[]> windows) {
        double[] planned = Shares.normalised(shares);
        long[] since = new long[planned.length];
        long total = 0;
        Optional<SplitChangePoint> best = Optional.empty();
        for (int window = windows.size() - 1; window >= 0; window--) {
            long[] counts = windows.get(window);
            Shares.normalised(shares, counts);
            for (int i = 0; i < counts.length; i++) {
                if (counts[i] > MOST - total) {
                    throw new IllegalArgumentException("windows[" + window + "][" + i + "]: " + counts[i]
                            + " (expected: at most 2^53 over all windows)");
                }
                total += counts[i];
                since[i] += counts[i];
            }
            double gain = Shares.logLikelihoodGain(planned, since);
            if (total > 0 && (best.isEmpty() || gain > best.get().logLikelihoodGain)) {
                best = Optional.of(new SplitChangePoint(window, gain, observed(since, total)));
            }
        }
        return best;
    }

    private static List<Double> observed(long[] counts, long total) {
        List<Double> shares = new ArrayList<>();
        for (long count : counts) {
            shares.add((double) count / total);
        }
        return shares;
    }
}
