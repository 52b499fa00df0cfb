package io.tallyward.statistics.split;

/** What both split checks ask of shares and counts. */
final class Shares {

    private Shares() {}

    /** The shares, scaled to add up to 1. */
    static double[] normalised(double[] shares, long[] counts) {
        if (shares.length < 2 || counts.length != shares.length) {
            throw new IllegalArgumentException("shares, counts: " + shares.length + ", " + counts.length
                    + " entries (expected: as many of each, at least two)");
        }
        double sum = 0;
        for (int i = 0; i < shares.length; i++) {
            if (!(shares[i] > 0 && shares[i] < Double.POSITIVE_INFINITY)) {
                throw new IllegalArgumentException(
                        "shares[" + i + "]: " + shares[i] + " (expected: positive and finite)");
            }
            if (counts[i] < 0) {
                throw new IllegalArgumentException("counts[" + i + "]: " + counts[i] + " (expected: 0 or more)");
            }
            sum += shares[i];
        }
        double[] scaled = new double[shares.length];
        for (int i = 0; i < shares.length; i++) {
            scaled[i] = shares[i] / sum;
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
}
