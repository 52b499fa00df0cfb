package io.tallyward.engine.count;

import io.tallyward.engine.event.RejectReason;
import java.util.Map;
import java.util.OptionalLong;

/**
 * Where a COUNT shard stands, for metrics: an immutable snapshot.
 *
 * @param partition the input partition
 * @param experiments by name
 * @param rejected how many records were rejected, by reason; every reason is present
 * @param watermarkMillis how far all sources of the partition have come; empty before anything was admitted
 */
public record CountView(
        int partition,
        Map<String, ExperimentCounts> experiments,
        Map<RejectReason, Long> rejected,
        OptionalLong watermarkMillis) {

    public CountView {
        experiments = Map.copyOf(experiments);
        rejected = Map.copyOf(rejected);
    }

    /**
     * One experiment in one partition.
     *
     * @param outcomes final outcomes
     * @param openEvents events whose outcome can still change; with the outcomes they add up to the events admitted
     * @param units units remembered in the ledger
     */
    public record ExperimentCounts(OutcomeCounts outcomes, long openEvents, int units) {}
}
