package io.tallyward.engine.plan;

import java.time.Instant;
import java.util.Map;

/**
 * A planned change of the split.
 *
 * @param from when the new shares take effect
 * @param shares planned share of every variant from then on; they add up to 1
 */
public record AllocationEpoch(Instant from, Map<String, Double> shares) {

    public AllocationEpoch {
        shares = Map.copyOf(shares);
    }
}
