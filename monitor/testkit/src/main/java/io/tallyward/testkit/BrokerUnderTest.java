package io.tallyward.testkit;

import java.time.Duration;
import java.util.ArrayList;
import java.util.Collection;
import java.util.Comparator;
import java.util.HashMap;
import java.util.List;
import java.util.Map;
import java.util.Optional;
import java.util.concurrent.ExecutionException;
import java.util.concurrent.Future;
import java.util.concurrent.TimeUnit;
import java.util.concurrent.TimeoutException;
import java.util.concurrent.atomic.AtomicInteger;
import org.apache.kafka.clients.admin.Admin;
import org.apache.kafka.clients.admin.NewTopic;
import org.apache.kafka.clients.consumer.ConsumerRecord;
import org.apache.kafka.clients.consumer.KafkaConsumer;
import org.apache.kafka.clients.consumer.OffsetAndMetadata;
import org.apache.kafka.clients.producer.KafkaProducer;
import org.apache.kafka.clients.producer.ProducerRecord;
import org.apache.kafka.common.KafkaFuture;
import org.apache.kafka.common.TopicPartition;
import org.apache.kafka.common.serialization.ByteArrayDeserializer;
import org.apache.kafka.common.serialization.ByteArraySerializer;

/**
 * A broker and the few things tests do with one. All users in one JVM share one broker, which is started by the first and
 * stopped when the JVM ends; closing a {@code BrokerUnderTest} closes only its own clients. Topic names come from
 * {@link #newTopic}, so that tests do not meet. Every call is bounded in time and fails with the reason. Thread-safe.
 */
public final class BrokerUnderTest implements AutoCloseable {

    private static final Duration PATIENCE = Duration.ofSeconds(30);
    private static final Duration POLL = Duration.ofMillis(100);
    private static final AtomicInteger TOPICS = new AtomicInteger();

    private final SharedBroker broker;
    private final Admin admin;
    private final KafkaProducer<byte[], byte[]> producer;

    private BrokerUnderTest(SharedBroker broker) {
        this.broker = broker;
        this.admin = Admin.create(Map.of("bootstrap.servers", broker.bootstrapServers()));
        // One request at a time: a first batch that finds no leader yet must not be overtaken by the second, or the
        // broker takes it for out of order until it times out.
        this.producer = new KafkaProducer<>(
                Map.of(
                        "bootstrap.servers", broker.bootstrapServers(),
                        "linger.ms", "5",
                        "max.in.flight.requests.per.connection", "1"),
                new ByteArraySerializer(),
                new ByteArraySerializer());
    }

    /** Connects to the JVM's broker, starting it if nobody has. */
    public static BrokerUnderTest start() {
        return new BrokerUnderTest(SharedBroker.get());
    }

    /** Where clients connect: {@code host:port}. */
    public String bootstrapServers() {
        return broker.bootstrapServers();
    }

    /** Which kind of broker this is, and why. */
    public String description() {
        return broker.description();
    }

    /** Creates a topic with a name that no other test in this JVM uses, and returns the name. */
    public String newTopic(String stem, int partitions) {
        String name = uniqueName(stem);
        createTopic(name, partitions, Map.of());
        return name;
    }

    /** A name that no other test in this JVM uses, for topics and groups that the subject of the test makes itself. */
    public String uniqueName(String stem) {
        return stem + "-" + ProcessHandle.current().pid() + "-" + TOPICS.incrementAndGet();
    }

    public void createTopic(String name, int partitions, Map<String, String> settings) {
        NewTopic topic = new NewTopic(name, Optional.of(partitions), Optional.empty()).configs(settings);
        answered(admin.createTopics(List.of(topic)).all());
    }

    /** Writes one record and waits until it is stored; a null partition lets the key decide. */
    public void produce(String topic, Integer partition, byte[] key, byte[] value) {
        produce(List.of(new ProducerRecord<>(topic, partition, key, value)));
    }

    /** Writes records and waits until all are stored. */
    public void produce(Collection<ProducerRecord<byte[], byte[]>> records) {
        List<Future<?>> stored = new ArrayList<>();
        records.forEach(record -> stored.add(producer.send(record)));
        producer.flush();
        for (Future<?> future : stored) {
            try {
                future.get(PATIENCE.toSeconds(), TimeUnit.SECONDS);
            } catch (ExecutionException | TimeoutException failure) {
                throw new IllegalStateException("a record was not stored by the " + description(), failure);
            } catch (InterruptedException interrupted) {
                Thread.currentThread().interrupt();
                throw new IllegalStateException("interrupted while producing", interrupted);
            }
        }
    }

    /** All committed records of a topic up to its end as it is now, partition by partition in offset order. */
    public List<ConsumerRecord<byte[], byte[]>> readAll(String topic) {
        try (KafkaConsumer<byte[], byte[]> consumer = reader()) {
            List<TopicPartition> partitions = new ArrayList<>();
            consumer.partitionsFor(topic).forEach(info -> partitions.add(new TopicPartition(topic, info.partition())));
            consumer.assign(partitions);
            consumer.seekToBeginning(partitions);
            Map<TopicPartition, Long> ends = consumer.endOffsets(partitions);
            List<ConsumerRecord<byte[], byte[]>> read = new ArrayList<>();
            long deadline = System.nanoTime() + PATIENCE.toNanos();
            while (ends.entrySet().stream().anyMatch(end -> consumer.position(end.getKey()) < end.getValue())) {
                if (System.nanoTime() > deadline) {
                    throw new IllegalStateException(topic + " could not be read to its end within " + PATIENCE);
                }
                consumer.poll(POLL).forEach(read::add);
            }
            read.sort(Comparator.comparingInt((ConsumerRecord<byte[], byte[]> record) -> record.partition())
                    .thenComparingLong(ConsumerRecord::offset));
            return read;
        }
    }

    /** What a group has committed. */
    public Map<TopicPartition, Long> committedOffsets(String group) {
        Map<TopicPartition, Long> offsets = new HashMap<>();
        Map<TopicPartition, OffsetAndMetadata> found =
                answered(admin.listConsumerGroupOffsets(group).partitionsToOffsetAndMetadata());
        found.forEach((partition, offset) -> offsets.put(partition, offset.offset()));
        return offsets;
    }

    @Override
    public void close() {
        producer.close(Duration.ofSeconds(1));
        admin.close(Duration.ofSeconds(1));
    }

    private KafkaConsumer<byte[], byte[]> reader() {
        return new KafkaConsumer<>(
                Map.of(
                        "bootstrap.servers", bootstrapServers(),
                        "isolation.level", "read_committed",
                        "enable.auto.commit", "false"),
                new ByteArrayDeserializer(),
                new ByteArrayDeserializer());
    }

    private <T> T answered(KafkaFuture<T> answer) {
        try {
            return answer.get(PATIENCE.toSeconds(), TimeUnit.SECONDS);
        } catch (ExecutionException | TimeoutException failure) {
            throw new IllegalStateException("the " + description() + " did not do what was asked", failure);
        } catch (InterruptedException interrupted) {
            Thread.currentThread().interrupt();
            throw new IllegalStateException("interrupted while waiting for the " + description(), interrupted);
        }
    }
}
