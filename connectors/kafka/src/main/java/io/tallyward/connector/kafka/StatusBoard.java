package io.tallyward.connector.kafka;

import java.time.Instant;
import java.util.Collection;
import java.util.List;
import java.util.Optional;
import java.util.OptionalLong;

/** Written by one worker, read by anybody: a reader sees the last published status, whole. */
final class StatusBoard {

    private final int worker;
    private WorkerState state = WorkerState.STARTING;
    private List<Integer> partitions = List.of();
    private Instant lastCommit;
    private String lastError;
    private long recordsConsumed;
    private long commits;
    private long aborts;
    private long restoreMillis;
    private OptionalLong lag = OptionalLong.empty();
    private RestoreProgress restoring = RestoreProgress.NONE;

    private volatile WorkerStatus published;

    StatusBoard(int worker) {
        this.worker = worker;
        this.published = WorkerStatus.initial(worker);
    }

    void state(WorkerState now) {
        state = now;
        publish();
    }

    void hosting(Collection<Integer> now) {
        partitions = List.copyOf(now);
        publish();
    }

    void consumed(int records) {
        recordsConsumed += records;
    }

    void committed(Instant when) {
        commits++;
        lastCommit = when;
        publish();
    }

    void aborted() {
        aborts++;
    }

    void restored(long millis) {
        restoreMillis = millis;
    }

    void restoring(RestoreProgress now) {
        restoring = now;
    }

    void lag(OptionalLong records) {
        lag = records;
    }

    void error(String sentence) {
        lastError = sentence;
    }

    void publish() {
        published = new WorkerStatus(
                worker,
                state,
                partitions,
                Optional.ofNullable(lastCommit),
                Optional.ofNullable(lastError),
                recordsConsumed,
                commits,
                aborts,
                restoreMillis,
                lag,
                restoring);
    }

    WorkerStatus published() {
        return published;
    }
}
