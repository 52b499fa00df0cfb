package io.tallyward.connector.kafka;

/** Takes notices from an {@link OutboxReader}. */
@FunctionalInterface
public interface Delivery {

    /**
     * Takes one notice and returns at once; the sending happens elsewhere and ends in {@link OutboxRecord#done()}. The same
     * notice may be handed out again after a restart or when a partition moves: at least once, never lost.
     */
    void deliver(OutboxRecord notice);
}
