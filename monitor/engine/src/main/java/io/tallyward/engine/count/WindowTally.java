package io.tallyward.engine.count;

import java.util.List;

/**
 * The sealed counts of one window in one partition.
 *
 * @param startMillis start of the window, milliseconds since the epoch, UTC-aligned
 * @param cells counts by allocation epoch and variant, ordered by epoch then variant; only cells with trials
 * @param outcomes what became of the events attributed to this window; those of all windows of a partition, the late ones
 *     after its last window was sealed, the ones
 *     outside the run and the rejected ones add up to the events read
 */
public record WindowTally(long startMillis, List<Cell> cells, OutcomeCounts outcomes) {

    public WindowTally {
        cells = List.copyOf(cells);
    }

    /**
     * Counts of one variant during one allocation epoch.
     *
     * @param epoch index of the allocation epoch
     * @param variant position of the variant in the plan
     * @param trials units first exposed here
     * @param successes trials with a click in time, at most {@code trials}
     */
    public record Cell(int epoch, int variant, long trials, long successes) {

        public Cell {
            if (!(trials >= 0 && successes >= 0 && successes <= trials)) {
                throw new IllegalArgumentException("cell: " + successes + " successes of " + trials
                        + " trials (expected: 0 <= successes <= trials)");
            }
        }
    }
}
