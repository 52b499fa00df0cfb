package io.tallyward.statistics.proportion;

/**
 * Counts of one variant and the control while the allocation was constant.
 *
 * @param successes successes of the variant, at most {@code trials}
 * @param trials trials of the variant, at most 2^53
 * @param controlSuccesses successes of the control, at most {@code controlTrials}
 * @param controlTrials trials of the control, at most 2^53
 */
public record Stratum(long successes, long trials, long controlSuccesses, long controlTrials) {

    /** Every count up to here is a double. */
    private static final long MOST = 1L << 53;

    public Stratum {
        requireCounts("", successes, trials);
        requireCounts("control ", controlSuccesses, controlTrials);
    }

    private static void requireCounts(String arm, long successes, long trials) {
        if (trials < 0 || trials > MOST) {
            throw new IllegalArgumentException(arm + "trials: " + trials + " (expected: in [0, 2^53])");
        }
        if (successes < 0 || successes > trials) {
            throw new IllegalArgumentException(arm + "successes: " + successes + " (expected: in [0, " + trials + "])");
        }
    }
}
