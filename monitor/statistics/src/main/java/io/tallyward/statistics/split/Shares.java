package io.tallyward.statistics.split;

/** What all split checks ask of shares and counts. */
final class Shares {

    /** A smaller share of the whole than this makes expected counts that double precision cannot hold. */
    private static final double LEAST = 1e-100;

    private Shares() {}

    /** The shares, scaled to add up to 1. */
    static double[] normalised(double[] shares, long[] counts) {
        if (counts.length != shares.length) {
            throw new IllegalArgumentException("shares, counts: " + shares.length + ", " + counts.length
                    + " entries (expected: as many of each, at least two)");
        }
        for (int i = 0; i < counts.length; i++) {
            if (counts[i] < 0) {
                throw new IllegalArgumentException("counts[" + i + "]: " + counts[i] + " (expected: 0 or more)");
            }
        }
        return normalised(shares);
    }

    /** The shares, scaled to add up to 1. */
    static double[] normalised(double[] shares) {
        if (shares.length < 2) {
            throw new IllegalArgumentException("shares: " + shares.length + " entries (expected: at least two)");
        }
        double sum = 0;
        for (int i = 0; i < shares.length; i++) {
            if (!(shares[i] > 0 && shares[i] < Double.POSITIVE_INFINITY)) {
                throw new IllegalArgumentException(
                        "shares[" + i + "]: " + shares[i] + " (expected: positive and finite)");
            }
            sum += shares[i];
        }
        double[] scaled = new double[shares.length];
        for (int i = 0; i < shares.length; i++) {
            scaled[i] = shares[i] / sum;
            if (!(sum < Double.POSITIVE_INFINITY && scaled[i] >= LEAST)) {
                throw new IllegalArgumentException("shares[" + i + "]: " + shares[i]
                        + " (expected: at least 1e-100 of the sum " + sum + ", and that finite)");
            }
        }
        return scaled;
    }

    static double total(long[] counts) {
        double total = 0;
        for (long count : counts) {
            total += count;
        }
        return total;
    }

    /**
     * How much better free shares explain counts than the given ones, in natural log likelihood: {@code sum n log(n / (N
     * s))}, as {@code sum N s h(d)} with {@code d} and {@code h} of {@link SequentialSplitTest}: no term is negative, so
     * nothing cancels.
     */
    static double logLikelihoodGain(double[] share, long[] counts) {
        double total = total(counts);
        double gain = 0;
        for (int i = 0; i < share.length && total > 0; i++) {
            double expected = share[i] * total;
            double departure = Math.fma(-share[i], total, counts[i]) / expected;
            gain += expected * (counts[i] == 0 ? 1 : SequentialSplitTest.excess(departure, counts[i] / expected));
        }
        return gain;
    }
}
