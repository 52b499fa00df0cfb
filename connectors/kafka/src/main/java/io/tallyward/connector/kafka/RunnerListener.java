package io.tallyward.connector.kafka;

/** Hears about what a runner cannot heal. */
@FunctionalInterface
public interface RunnerListener {

    /**
     * A worker has stopped because a shard broke an invariant. Nothing of the failed step was committed. Called once per
     * failed worker, on that worker's thread, which ends afterwards; it must not close the runner from this call.
     *
     * @param group the consumer group
     * @param cause what was thrown; its message names partition and offset where known
     */
    void onFatal(String group, Throwable cause);
}
