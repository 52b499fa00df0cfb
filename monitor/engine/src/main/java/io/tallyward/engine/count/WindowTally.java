package io.tallyward.engine.count;

import java.util.List;

/**
 * The sealed counts of one window in one partition.
 *
 * @param startMillis start of the window, milliseconds since the epoch, UTC-aligned
 * @param cells counts by allocation epoch and variant, ordered by epoch then variant; only cells with trials
 * @param segments units first exposed in the window by segment, epoch and variant, for finding where a broken split comes
 *     from; empty unless the plan names segments
 * @param outcomes what became of the events attributed to this window; those of all windows of a partition, the late ones
 *     after its last window was sealed, the ones
 *     outside the run and the rejected ones add up to the events read
 */
public record WindowTally(long startMillis, List<Cell> cells, List<SegmentCell> segments, OutcomeCounts outcomes) {

    public WindowTally {
        cells = List.copyOf(cells);
        segments = List.copyOf(segments);
    }

    /** A window of a plan without segments. */
    public WindowTally(long startMillis, List<Cell> cells, OutcomeCounts outcomes) {
        this(startMillis, cells, List.of(), outcomes);
    }

    /**
     * Counts of one variant during one allocation epoch. A unit belongs to the epoch of its first exposure, as it was then
     * that it was allocated.
     *
     * <p>The sums over units are what a variance between units needs: {@code x} and {@code y} being the trials and successes of
     * a unit in all sealed windows, they say by how much this window raised the sums of {@code x}^2, {@code x y} and
     * {@code y}^2 over all units. Where every unit is one trial, they are the counts themselves.
     *
     * @param epoch index of the allocation epoch
     * @param variant position of the variant in the plan
     * @param units units whose first exposure lies in this window
     * @param trials what is counted: units first exposed here, or views
     * @param successes trials with a click in time, at most {@code trials}
     * @param trialSquares growth of the sum of x^2, at least {@code trials}
     * @param products growth of the sum of x y
     * @param successSquares growth of the sum of y^2, at least {@code successes}
     */
    public record Cell(
            int epoch,
            int variant,
            long units,
            long trials,
            long successes,
            long trialSquares,
            long products,
            long successSquares) {

        public Cell {
            if (!(trials >= 0 && successes >= 0 && successes <= trials)) {
                throw new IllegalArgumentException("cell: " + successes + " successes of " + trials
                        + " trials (expected: 0 <= successes <= trials)");
            }
            if (!(units >= 0 && units <= trials)) {
                throw new IllegalArgumentException(
                        "cell: " + units + " units with " + trials + " trials (expected: 0 <= units <= trials)");
            }
            boolean possible = trialSquares >= trials
                    && successSquares >= successes
                    && products >= successSquares
                    && trialSquares >= products;
            if (!possible) {
                throw new IllegalArgumentException("cell: sums of squares " + trialSquares + ", products " + products
                        + " and " + successSquares + " for " + trials + " trials and " + successes
                        + " successes (expected: trials <= trialSquares, successes <= successSquares <= products <="
                        + " trialSquares)");
            }
        }

        /** Counts of units of which each is one trial. */
        public static Cell ofUnits(int epoch, int variant, long trials, long successes) {
            return new Cell(epoch, variant, trials, trials, successes, trials, successes, successes);
        }

        /** Whether every unit is one trial, so that the sums follow from the counts. */
        public boolean unitsAreTrials() {
            return units == trials && trialSquares == trials && products == successes && successSquares == successes;
        }

        /** Both together. The other cell is of the same epoch and variant. */
        public Cell plus(Cell other) {
            if (!(epoch == other.epoch && variant == other.variant)) {
                throw new IllegalArgumentException("cell: epoch " + other.epoch + ", variant " + other.variant
                        + " (expected: epoch " + epoch + ", variant " + variant + ")");
            }
            return new Cell(
                    epoch,
                    variant,
                    units + other.units,
                    trials + other.trials,
                    successes + other.successes,
                    trialSquares + other.trialSquares,
                    products + other.products,
                    successSquares + other.successSquares);
        }
    }

    /**
     * How many units of one segment were first exposed to one variant.
     *
     * @param field name of the segment, as in {@code platform}
     * @param value its value on the first exposure; a value beyond the bound on values is told as {@code other}
     * @param epoch index of the allocation epoch
     * @param variant position of the variant in the plan
     * @param units units first exposed here, at least 1
     */
    public record SegmentCell(String field, String value, int epoch, int variant, long units) {

        public SegmentCell {
            if (!(units >= 1)) {
                throw new IllegalArgumentException("segment: " + units + " units (expected: at least 1)");
            }
        }
    }
}
