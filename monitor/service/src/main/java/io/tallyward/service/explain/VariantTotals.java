package io.tallyward.service.explain;

import io.tallyward.engine.record.DecisionRecord;
import io.tallyward.engine.record.DecisionRecord.VariantCount;

/**
 * Counts of one variant over all epochs.
 *
 * @param trials units, or views where the plan counts views
 * @param units units
 * @param successes trials with a click in time
 */
record VariantTotals(long trials, long units, long successes) {

    static VariantTotals of(DecisionRecord record, String variant) {
        long trials = 0;
        long units = 0;
        long successes = 0;
        for (VariantCount count : record.counts()) {
            if (count.variant().equals(variant)) {
                trials += count.trials();
                units += count.units();
                successes += count.successes();
            }
        }
        return new VariantTotals(trials, units, successes);
    }

    /** Share of the trials that are successes; 0 while there are none. */
    double rate() {
        return trials == 0 ? 0 : (double) successes / trials;
    }
}
