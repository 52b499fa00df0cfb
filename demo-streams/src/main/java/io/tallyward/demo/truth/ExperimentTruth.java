package io.tallyward.demo.truth;

import io.tallyward.demo.story.Story;
import java.util.HashMap;
import java.util.Map;

/**
 * The right counts of one experiment.
 *
 * @param story the story of the experiment
 * @param cells counts of the windows that must be sealed at the end of the stream; only places with trials
 * @param outcomes how many events ended in each outcome, by published code; trials of windows that cannot be sealed yet
 *     are left out, all other events are in
 */
public record ExperimentTruth(Story story, Map<Cell, Count> cells, Map<String, Long> outcomes) {

    public ExperimentTruth {
        cells = Map.copyOf(cells);
        outcomes = Map.copyOf(outcomes);
    }

    /** Trials and successes summed over partitions and windows, for windows that end at or before a moment; keyed by epoch and variant. */
    public Map<Stratum, Count> totals(long untilMillis) {
        Map<Stratum, Count> totals = new HashMap<>();
        cells.forEach((cell, count) -> {
            if (cell.windowStartMillis() < untilMillis) {
                totals.merge(
                        new Stratum(cell.epoch(), story.variants().get(cell.variant())), count.plain(), Count::plus);
            }
        });
        return totals;
    }

    /**
     * A variant during an allocation epoch.
     *
     * @param epoch index of the epoch
     * @param variant name of the variant
     */
    public record Stratum(int epoch, String variant) {}
}
