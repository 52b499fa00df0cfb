package io.tallyward.connector.kafka;

import java.util.List;
import java.util.Objects;

/**
 * A runner at one moment.
 *
 * @param group the consumer group
 * @param workers one status per worker, by number
 */
public record RunnerStatus(String group, List<WorkerStatus> workers) {

    public RunnerStatus {
        Objects.requireNonNull(group, "group");
        workers = List.copyOf(workers);
    }

    /** Whether every worker is doing what it is for. */
    public boolean healthy() {
        return workers.stream().allMatch(worker -> worker.state().healthy());
    }

    /** The partition numbers hosted by this runner, ascending. */
    public List<Integer> partitions() {
        return workers.stream()
                .flatMap(worker -> worker.partitions().stream())
                .sorted()
                .toList();
    }

    /** Input records applied by all workers since the runner started. */
    public long recordsConsumed() {
        return workers.stream().mapToLong(WorkerStatus::recordsConsumed).sum();
    }
}
