package io.tallyward.engine.record;

import java.util.List;

/**
 * The strongest evidence against the planned split so far. It stays when later counts speak for the plan, and with its
 * counts it can be computed again.
 *
 * @param logBayesFactor natural logarithm of the evidence then; positive
 * @param units how many units each variant had then, by allocation epoch and variant in the plan's order
 */
public record SplitPeak(double logBayesFactor, List<EpochUnits> units) {

    public SplitPeak {
        units = List.copyOf(units);
    }

    /**
     * Units of one variant during one allocation epoch.
     *
     * @param epoch index of the allocation epoch
     * @param variant name of the variant
     * @param units what was counted, 0 or more
     */
    public record EpochUnits(int epoch, String variant, long units) {}
}
