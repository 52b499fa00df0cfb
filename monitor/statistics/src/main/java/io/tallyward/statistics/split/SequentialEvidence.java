package io.tallyward.statistics.split;

/**
 * The evidence against the planned split as it was read so far. The Bayes factor of {@link SequentialSplitTest} is, without
 * a mismatch, a martingale that starts at 1, so the reciprocal of its largest value so far is a p-value that holds at every
 * reading and after any rule of stopping (Ville 1939; Lindon and Malek 2022;
 * recalled): {@code p = min(1, min over readings of 1 / BF)}. It never rises. Reading it less often only makes it larger.
 *
 * <p>Epochs with shares of their own: the counts of different epochs are disjoint, so the product of their Bayes factors,
 * the sum of the logarithms, is the evidence against all their planned splits together.
 *
 * @param largestLogBayesFactor natural logarithm, the largest of all readings and of 0 before the first; 0 or more, finite
 */
public record SequentialEvidence(double largestLogBayesFactor) {

    /** Before the first reading. */
    public static final SequentialEvidence NONE = new SequentialEvidence(0);

    private static final double LN_10 = StrictMath.log(10);

    public SequentialEvidence {
        if (!(largestLogBayesFactor >= 0 && largestLogBayesFactor < Double.POSITIVE_INFINITY)) {
            throw new IllegalArgumentException(
                    "largestLogBayesFactor: " + largestLogBayesFactor + " (expected: 0 or more, finite)");
        }
    }

    /**
     * The evidence after another reading.
     *
     * @param logBayesFactor of all counts so far, added up over epochs; finite
     */
    public SequentialEvidence after(double logBayesFactor) {
        if (!(StrictMath.abs(logBayesFactor) < Double.POSITIVE_INFINITY)) {
            throw new IllegalArgumentException("logBayesFactor: " + logBayesFactor + " (expected: finite)");
        }
        return logBayesFactor > largestLogBayesFactor ? new SequentialEvidence(logBayesFactor) : this;
    }

    /** The sequential p-value, in [0, 1]; 0 below 1e-323 or so. Relative error that of the Bayes factor. */
    public double pValue() {
        return StrictMath.exp(-largestLogBayesFactor);
    }

    /** The decimal logarithm of {@link #pValue}; 0 or less, never underflows. */
    public double log10PValue() {
        return largestLogBayesFactor == 0 ? 0 : -largestLogBayesFactor / LN_10;
    }
}
