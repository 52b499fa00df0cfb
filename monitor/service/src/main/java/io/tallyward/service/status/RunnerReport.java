package io.tallyward.service.status;

import java.util.Objects;
import java.util.OptionalDouble;

/**
 * What the hosts of one group of shards have done since the process started.
 *
 * @param group which shards, as in {@code count} or {@code decide}
 * @param commits committed transactions
 * @param aborts aborted transactions
 * @param restoreSeconds how long the latest restore took; empty before the first has ended
 * @param waitingPartitions how many partitions are here and have no restored shard yet
 * @param remainingRecords state records still to be read for those whose restore has begun, at most
 * @param brokerReached whether no worker is kept from its work by the broker
 */
public record RunnerReport(
        String group,
        long commits,
        long aborts,
        OptionalDouble restoreSeconds,
        int waitingPartitions,
        long remainingRecords,
        boolean brokerReached) {

    public RunnerReport {
        Objects.requireNonNull(group, "group");
        Objects.requireNonNull(restoreSeconds, "restoreSeconds");
    }
}
