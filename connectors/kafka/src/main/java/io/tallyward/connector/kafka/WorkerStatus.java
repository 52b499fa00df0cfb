package io.tallyward.connector.kafka;

import java.time.Instant;
import java.util.List;
import java.util.Optional;
import java.util.OptionalLong;

/**
 * One worker at one moment.
 *
 * @param worker its number, from 0
 * @param state what it is doing
 * @param partitions the partition numbers whose shards it hosts and has restored, ascending
 * @param lastCommit when a transaction last succeeded, by the runner's clock; empty before the first
 * @param lastError the last sentence about what went wrong, kept after recovery; empty if nothing has
 * @param recordsConsumed input records applied since the runner started
 * @param commits transactions committed since the runner started
 * @param aborts transactions that failed since the runner started
 * @param restoreMillis how long the last restoration of a shard took; 0 before the first
 * @param lag input records not yet read in the hosted partitions; empty while not known
 * @param restoring how far it is with bringing shards back
 */
public record WorkerStatus(
        int worker,
        WorkerState state,
        List<Integer> partitions,
        Optional<Instant> lastCommit,
        Optional<String> lastError,
        long recordsConsumed,
        long commits,
        long aborts,
        long restoreMillis,
        OptionalLong lag,
        RestoreProgress restoring) {

    public WorkerStatus {
        partitions = List.copyOf(partitions);
    }

    static WorkerStatus initial(int worker) {
        return new WorkerStatus(
                worker,
                WorkerState.STARTING,
                List.of(),
                Optional.empty(),
                Optional.empty(),
                0,
                0,
                0,
                0,
                OptionalLong.empty(),
                RestoreProgress.NONE);
    }
}
