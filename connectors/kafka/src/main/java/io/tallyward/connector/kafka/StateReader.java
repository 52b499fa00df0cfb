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
 * Reads the committed state of shards, of each from the beginning of its partition of the state topic to the high watermark
 * as it was when the reading began. Going to the high watermark, and not only to the last stable offset, waits for
 * transactions that are just ending: the coordinator may have made a predecessor's offsets visible a moment before its
 * state.
 */
final class StateReader implements AutoCloseable {

    private static final Duration POLL = Duration.ofMillis(200);

    /** Records after which the worker looks after its other shards; reading them takes about a tenth of a second. */
    private static final int CHUNK = 100_000;

    private static final Duration CLOSE_PATIENCE = Duration.ofSeconds(1);

    private final Consumer<byte[], byte[]> consumer;
    private final Cluster cluster;
    private final String stateTopic;

    StateReader(Consumer<byte[], byte[]> consumer, Cluster cluster, String stateTopic) {
        this.consumer = consumer;
        this.cluster = cluster;
        this.stateTopic = stateTopic;
    }

    /** Finds out how much there is to read. */
    void begin(Restoration restoration) {
        TopicPartition source = new TopicPartition(stateTopic, restoration.partition());
        long end = cluster.endOffset(source);
        consumer.assign(List.of(source));
        consumer.seekToBeginning(List.of(source));
        long first = consumer.position(source);
        restoration.begin(first, end);
        foresee(restoration, source, Math.max(first, end - restoration.foresight()));
    }

    /** Shows the shard how its state ends, as far as that is at hand. */
    private void foresee(Restoration restoration, TopicPartition source, long from) {
        long end = restoration.end();
        if (from >= end) {
            return;
        }
        consumer.seek(source, from);
        for (long before = -1; before < consumer.position(source) && consumer.position(source) < end; ) {
            before = consumer.position(source);
            consumer.poll(POLL).forEach(restoration::foresee);
        }
        consumer.seek(source, restoration.position());
    }

    /**
     * Reads a part of what is left.
     *
     * @return whether that was anything at all
     * @throws WakeupException if the worker is to stop
     */
    boolean advance(Restoration restoration, BooleanSupplier stopping) {
        TopicPartition source = new TopicPartition(stateTopic, restoration.partition());
        if (!consumer.assignment().contains(source)) {
            consumer.assign(List.of(source));
            consumer.seek(source, restoration.position());
        }
        long began = restoration.position();
        for (int read = 0; read < CHUNK && !restoration.complete(); ) {
            if (stopping.getAsBoolean()) {
                throw new WakeupException();
            }
            ConsumerRecords<byte[], byte[]> records = consumer.poll(POLL);
            for (ConsumerRecord<byte[], byte[]> record : records) {
                restoration.take(record);
            }
            long before = restoration.position();
            restoration.reached(consumer.position(source));
            if (restoration.position() == before) {
                break;
            }
            read += records.count();
        }
        return restoration.position() > began;
    }

    @Override
    public void close() {
        consumer.close(CloseOptions.timeout(CLOSE_PATIENCE));
    }
}
