package io.tallyward.engine.count;

import java.util.List;
import java.util.Objects;

/**
 * What a COUNT shard tells the deciding side about one experiment: how far it has sealed, and the windows it sealed since
 * its previous update. Windows without events are not listed; {@code sealedUntilMillis} covers them.
 *
 * @param experiment name of the experiment
 * @param planDigest digest of the plan the counts were made under
 * @param partition the input partition that was counted
 * @param partitions how many input partitions there are; an experiment's window is complete when all have sealed it
 * @param sealedUntilMillis every window that ends at or before this moment is sealed in this partition
 * @param cause why the windows of this update were sealed
 * @param windows sealed windows in ascending order
 */
public record TallyUpdate(
        String experiment,
        String planDigest,
        int partition,
        int partitions,
        long sealedUntilMillis,
        SealCause cause,
        List<WindowTally> windows) {

    public TallyUpdate {
        Objects.requireNonNull(experiment, "experiment");
        Objects.requireNonNull(planDigest, "planDigest");
        Objects.requireNonNull(cause, "cause");
        windows = List.copyOf(windows);
        if (!(partition >= 0 && partition < partitions)) {
            throw new IllegalArgumentException(
                    "partition: " + partition + " (expected: 0 to " + (partitions - 1) + ")");
        }
    }
}
