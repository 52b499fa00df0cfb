package io.tallyward.connector.kafka;

import java.time.Duration;
import java.util.Map;
import java.util.Optional;
import java.util.Set;
import org.apache.kafka.clients.consumer.Consumer;
import org.apache.kafka.common.KafkaException;
import org.apache.kafka.common.TopicPartition;
import org.apache.kafka.common.errors.InterruptException;
import org.apache.kafka.common.errors.WakeupException;

/**
 * Whether the brokers of the assigned partitions still answer. Polling cannot tell: a consumer that hears nothing and a
 * consumer that has nothing to hear look the same, and its lag stays at the zero that it last heard. So the ends of the
 * partitions are asked for every few seconds, and silence counts as silence only while the answers come.
 */
final class Contact {

    static final Duration EVERY = Duration.ofSeconds(5);

    private static final Duration PATIENCE = Duration.ofSeconds(2);

    private final Consumer<byte[], byte[]> consumer;
    private final Cluster cluster;
    private Map<TopicPartition, Long> ends = Map.of();
    private KafkaException trouble;
    private long lastAskedMillis;
    private boolean asked;

    Contact(Consumer<byte[], byte[]> consumer, Cluster cluster) {
        this.consumer = consumer;
        this.cluster = cluster;
    }

    /** Asks if it is time to; after a silence always, so that recovery is noticed at once. */
    void refresh(long nowMillis) {
        if (asked && trouble == null && !Elapsed.since(lastAskedMillis, nowMillis, EVERY)) {
            return;
        }
        asked = true;
        lastAskedMillis = nowMillis;
        Set<TopicPartition> assigned = consumer.assignment();
        try {
            if (assigned.isEmpty()) {
                cluster.ping();
                ends = Map.of();
            } else {
                ends = consumer.endOffsets(assigned, PATIENCE);
            }
            trouble = null;
        } catch (WakeupException | InterruptException stop) {
            throw stop;
        } catch (KafkaException silence) {
            trouble = silence;
            ends = Map.of();
        }
    }

    /** Forgets the answers, because the assignment changed. */
    void reset() {
        ends = Map.of();
        asked = false;
    }

    Optional<KafkaException> trouble() {
        return Optional.ofNullable(trouble);
    }

    /** Whether everything in a partition has been read, as far as the brokers' own recent answers go. */
    boolean caughtUp(TopicPartition partition) {
        Long end = ends.get(partition);
        return end != null
                && consumer.assignment().contains(partition)
                && consumer.currentLag(partition).orElse(1) == 0
                && consumer.position(partition) >= end;
    }
}
