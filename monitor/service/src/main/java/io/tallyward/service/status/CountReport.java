package io.tallyward.service.status;

import io.tallyward.engine.count.OutcomeCounts;
import io.tallyward.engine.event.RejectReason;
import java.util.Collections;
import java.util.EnumMap;
import java.util.Map;
import java.util.Objects;
import java.util.OptionalLong;
import java.util.TreeMap;

/**
 * What one COUNT shard has done so far: an immutable snapshot. All numbers are totals of the shard, not differences to
 * the report before.
 *
 * @param experiments counts by name of the experiment
 * @param watermarkMillis the partition's event-time watermark, milliseconds since the epoch; empty before its first event
 * @param rejected records that were not admitted, by reason; a reason that is not listed has none
 * @param ledgerUnits how many units the shard remembers
 * @param unkeyed whether the shard has seen that the topic is not keyed by unit
 */
public record CountReport(
        Map<String, ExperimentCount> experiments,
        OptionalLong watermarkMillis,
        Map<RejectReason, Long> rejected,
        long ledgerUnits,
        boolean unkeyed) {

    public CountReport {
        experiments = Collections.unmodifiableMap(new TreeMap<>(experiments));
        Map<RejectReason, Long> reasons = new EnumMap<>(RejectReason.class);
        reasons.putAll(rejected);
        rejected = Collections.unmodifiableMap(reasons);
        Objects.requireNonNull(watermarkMillis, "watermarkMillis");
        if (!(ledgerUnits >= 0)) {
            throw new IllegalArgumentException("ledgerUnits: " + ledgerUnits + " (expected: 0 or more)");
        }
    }

    /**
     * The events of one experiment in one partition.
     *
     * @param outcomes events whose outcome is final
     * @param open events whose outcome may still change, 0 or more
     */
    public record ExperimentCount(OutcomeCounts outcomes, long open) {

        public ExperimentCount {
            Objects.requireNonNull(outcomes, "outcomes");
            if (!(open >= 0)) {
                throw new IllegalArgumentException("open: " + open + " (expected: 0 or more)");
            }
        }
    }
}
