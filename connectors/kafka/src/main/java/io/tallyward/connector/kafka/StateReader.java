package io.tallyward.connector.kafka;

import java.time.Duration;
import java.util.List;
import java.util.function.BooleanSupplier;
import org.apache.kafka.clients.consumer.CloseOptions;
import org.apache.kafka.clients.consumer.Consumer;
import org.apache.kafka.clients.consumer.ConsumerRecord;
import org.apache.kafka.clients.consumer.ConsumerRecords;
import org.apache.kafka.common.TopicPartition;
import org.apache.kafka.common.errors.WakeupException;

/**
 * Reads a shard's committed state, from the beginning of its partition of the state topic to the high watermark as it was
 * when the reading began. Going to the high watermark, and not only to the last stable offset, waits for transactions that
 * are just ending: the coordinator may have made a predecessor's offsets visible a moment before its state.
 */
final class StateReader implements AutoCloseable {

    private static final Duration POLL = Duration.ofMillis(200);

    /** Polls without progress before giving up; together half a minute, twice the transaction timeout. */
    static final int PATIENCE = 150;

    private static final Duration CLOSE_PATIENCE = Duration.ofSeconds(1);

    private final Consumer<byte[], byte[]> consumer;
    private final Cluster cluster;
    private final String stateTopic;

    StateReader(Consumer<byte[], byte[]> consumer, Cluster cluster, String stateTopic) {
        this.consumer = consumer;
        this.cluster = cluster;
        this.stateTopic = stateTopic;
    }

    /**
     * Restores a shard and returns how many records that took.
     *
     * @throws BrokerException if reading makes no progress
     * @throws WakeupException if the worker is to stop
     */
    long restore(int partition, GuardedShard shard, BooleanSupplier stopping) {
        TopicPartition source = new TopicPartition(stateTopic, partition);
        long end = cluster.endOffset(source);
        consumer.assign(List.of(source));
        consumer.seekToBeginning(List.of(source));
        long restored = 0;
        long position = consumer.position(source);
        for (int waited = 0; position < end; waited++) {
            if (stopping.getAsBoolean()) {
                throw new WakeupException();
            }
            if (waited == PATIENCE) {
                throw new BrokerException("restoring from " + source + " stands still at offset " + position + " of "
                        + end + ": a broker is missing, or a transaction there does not end");
            }
            ConsumerRecords<byte[], byte[]> records = consumer.poll(POLL);
            for (ConsumerRecord<byte[], byte[]> record : records) {
                shard.restore(record);
            }
            restored += records.count();
            long before = position;
            position = consumer.position(source);
            if (position > before) {
                waited = 0;
            }
        }
        return restored;
    }

    @Override
    public void close() {
        consumer.close(CloseOptions.timeout(CLOSE_PATIENCE));
    }
}
