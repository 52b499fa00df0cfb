package io.tallyward.connector.kafka;

import java.time.Duration;
import java.util.Map;
import java.util.Objects;

/**
 * A topic that belongs to the service itself and is created by it. How many replicas it gets is left to the broker.
 *
 * @param name the topic's name
 * @param partitions how many partitions it must have, 1 or more
 * @param settings topic settings given at creation; an existing topic keeps its own
 */
public record InternalTopic(String name, int partitions, Map<String, String> settings) {

    public InternalTopic {
        Objects.requireNonNull(name, "name");
        settings = Map.copyOf(settings);
        if (partitions < 1) {
            throw new IllegalArgumentException("partitions of " + name + ": " + partitions + " (expected: 1 or more)");
        }
    }

    /**
     * A topic that remembers the last value of each key. Segments are small and roll every few minutes, because only closed
     * segments are compacted, and a shard that starts reads all that is left.
     */
    public static InternalTopic compacted(String name, int partitions) {
        return new InternalTopic(
                name,
                partitions,
                Map.of(
                        "cleanup.policy", "compact",
                        "segment.bytes", Integer.toString(8 * 1024 * 1024),
                        "segment.ms", Long.toString(Duration.ofMinutes(10).toMillis()),
                        "min.cleanable.dirty.ratio", "0.2",
                        "delete.retention.ms", Long.toString(Duration.ofDays(1).toMillis()),
                        "max.message.bytes", Integer.toString(1024 * 1024 + 64 * 1024)));
    }

    /** A topic whose records are kept for ever, whatever their timestamps. */
    public static InternalTopic kept(String name, int partitions) {
        return new InternalTopic(name, partitions, Map.of("cleanup.policy", "delete", "retention.ms", "-1"));
    }

    /** A topic whose records may go after a while, counted from their timestamps. */
    public static InternalTopic expiring(String name, int partitions, Duration retention) {
        return new InternalTopic(
                name,
                partitions,
                Map.of("cleanup.policy", "delete", "retention.ms", Long.toString(retention.toMillis())));
    }
}
