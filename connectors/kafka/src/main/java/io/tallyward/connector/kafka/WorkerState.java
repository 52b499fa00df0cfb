package io.tallyward.connector.kafka;

/** What one worker of a runner is doing. */
public enum WorkerState {
    /** Connecting, or a member of the group that has not been given partitions yet. Leads to every other state. */
    STARTING(true),

    /** Rebuilding shards from their state topic. Ends in {@link #RUNNING}, or in {@link #BROKER_UNREACHABLE}. */
    RESTORING(true),

    /** Reading and committing; also where a worker waits that has joined the group and got no partition. */
    RUNNING(true),

    /**
     * Something outside does not answer or refuses: the broker, a topic, a permission. The sentence is in the status; the
     * worker keeps trying and goes back to {@link #STARTING} or {@link #RESTORING} by itself.
     */
    BROKER_UNREACHABLE(false),

    /** A shard broke an invariant. The worker has stopped without committing and stays stopped. */
    FAILED(false),

    /** Closed in order. */
    STOPPED(false);

    private final boolean healthy;

    WorkerState(boolean healthy) {
        this.healthy = healthy;
    }

    /** Whether a worker in this state is doing, or about to do, what it is for. */
    public boolean healthy() {
        return healthy;
    }
}
