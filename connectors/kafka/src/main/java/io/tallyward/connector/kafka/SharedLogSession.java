package io.tallyward.connector.kafka;

import io.tallyward.connector.kafka.SharedLog.Entry;
import io.tallyward.connector.kafka.SharedLog.Reader;
import java.time.Duration;
import java.util.ArrayList;
import java.util.List;
import java.util.concurrent.ExecutionException;
import java.util.concurrent.Future;
import java.util.concurrent.TimeUnit;
import java.util.concurrent.TimeoutException;
import org.apache.kafka.clients.consumer.CloseOptions;
import org.apache.kafka.clients.consumer.Consumer;
import org.apache.kafka.clients.consumer.ConsumerRecord;
import org.apache.kafka.clients.consumer.ConsumerRecords;
import org.apache.kafka.clients.consumer.OffsetOutOfRangeException;
import org.apache.kafka.clients.producer.Producer;
import org.apache.kafka.clients.producer.ProducerRecord;
import org.apache.kafka.clients.producer.RecordMetadata;
import org.apache.kafka.common.KafkaException;
import org.apache.kafka.common.TopicPartition;
import org.apache.kafka.common.errors.InterruptException;

/** The clients of a shared log between two outages. Not thread-safe. */
final class SharedLogSession implements AutoCloseable {

    private static final Duration POLL = Duration.ofMillis(200);
    private static final Duration PATIENCE = Duration.ofSeconds(10);
    private static final Duration CLOSE_PATIENCE = Duration.ofSeconds(1);

    private final String topic;
    private final TopicPartition partition;
    private final SharedLogClients clients;
    private final Cluster cluster;
    private final Consumer<byte[], byte[]> consumer;
    private Producer<byte[], byte[]> producer;
    private final String identity;
    private long position;

    /**
     * Begins where an earlier session ended.
     *
     * @param position where to go on reading; 0 at first
     * @param knownIdentity which topic of the name was read before; null at first
     */
    SharedLogSession(String topic, String broker, SharedLogClients clients, long position, String knownIdentity) {
        this.topic = topic;
        this.clients = clients;
        this.position = position;
        partition = new TopicPartition(topic, 0);
        cluster = clients.cluster();
        try {
            new InternalTopics(cluster, broker).ensure(List.of(InternalTopic.kept(topic, 1)));
            String found = cluster.ids(List.of(topic)).get(topic);
            identity = knownIdentity == null ? found : knownIdentity;
            requireSame(found);
            consumer = clients.reader();
        } catch (RuntimeException failure) {
            cluster.close();
            throw failure;
        }
        consumer.assign(List.of(partition));
        consumer.seek(partition, position);
    }

    private void requireSame(String found) {
        if (identity != null && found != null && !identity.equals(found)) {
            throw new BrokerException(
                    "topic " + topic + " was removed and created anew while the service ran: restart every"
                            + " instance, so that all read it from its beginning");
        }
    }

    /** Which topic of the name is read; null where brokers do not tell. */
    String identity() {
        return identity;
    }

    /** Behind the last entry that was handed out. */
    long position() {
        return position;
    }

    /** Hands out everything that is written by now. */
    void readToEnd(Reader reader) {
        requireSame(cluster.ids(List.of(topic)).get(topic));
        long end = cluster.endOffset(partition);
        if (end < position) {
            throw cut();
        }
        long deadline = System.nanoTime() + PATIENCE.toNanos();
        while (position < end) {
            if (System.nanoTime() > deadline) {
                throw new org.apache.kafka.common.errors.TimeoutException(
                        "topic " + topic + " could not be read up to " + end);
            }
            read(reader);
        }
    }

    private void read(Reader reader) {
        ConsumerRecords<byte[], byte[]> records;
        try {
            records = consumer.poll(POLL);
        } catch (OffsetOutOfRangeException gone) {
            throw cut();
        }
        for (ConsumerRecord<byte[], byte[]> record : records) {
            hand(record, reader);
            position = record.offset() + 1;
        }
        position = consumer.position(partition);
    }

    private void hand(ConsumerRecord<byte[], byte[]> record, Reader reader) {
        try {
            reader.read(new Entry(record.key(), record.value()));
        } catch (RuntimeException unreadable) {
            throw new IllegalStateException(
                    topic + "-0@" + record.offset() + " cannot be read: " + unreadable.getMessage(), unreadable);
        }
    }

    private BrokerException cut() {
        if (position == 0) {
            return new BrokerException("topic " + topic + " has lost its first entries: it has to keep them for ever"
                    + " (cleanup.policy=delete, retention.ms=-1, retention.bytes=-1); correct that, and start under a new"
                    + " name");
        }
        return new BrokerException(
                "topic " + topic + " ends before " + position + ", up to where it has been read: it was"
                        + " removed or cut while the service ran; restart every instance so that all read it from its beginning");
    }

    /** Appends entries in order, all of them or the first of them. */
    void append(List<Entry> entries) {
        if (entries.isEmpty()) {
            return;
        }
        if (producer == null) {
            producer = clients.writer();
        }
        List<Future<RecordMetadata>> sent = new ArrayList<>();
        for (Entry entry : entries) {
            sent.add(producer.send(new ProducerRecord<>(topic, 0, entry.key(), entry.value())));
        }
        producer.flush();
        sent.forEach(this::await);
    }

    private void await(Future<RecordMetadata> sent) {
        try {
            sent.get(PATIENCE.toMillis(), TimeUnit.MILLISECONDS);
        } catch (InterruptedException interrupted) {
            throw new InterruptException(interrupted);
        } catch (TimeoutException late) {
            throw new org.apache.kafka.common.errors.TimeoutException("topic " + topic + " took no entry", late);
        } catch (ExecutionException failure) {
            throw failure.getCause() instanceof KafkaException refused ? refused : new KafkaException(failure);
        }
    }

    @Override
    public void close() {
        try {
            consumer.close(CloseOptions.timeout(CLOSE_PATIENCE));
        } finally {
            cluster.close();
            if (producer != null) {
                producer.close(CLOSE_PATIENCE);
            }
        }
    }
}
