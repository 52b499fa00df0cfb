package io.tallyward.demo.check;

import java.time.Duration;
import java.util.List;
import java.util.Map;
import java.util.function.Consumer;
import org.apache.kafka.clients.consumer.ConsumerConfig;
import org.apache.kafka.clients.consumer.ConsumerRecord;
import org.apache.kafka.clients.consumer.KafkaConsumer;
import org.apache.kafka.common.TopicPartition;
import org.apache.kafka.common.serialization.ByteArrayDeserializer;

/** Reads a topic from its beginning to its present end, committed records only. */
public final class CommittedTopic {

    private static final Duration PATIENCE = Duration.ofSeconds(60);
    private static final Duration POLL = Duration.ofMillis(200);

    private CommittedTopic() {}

    /**
     * Hands every committed record with a value over, in the order of each partition.
     *
     * @throws IllegalStateException when the topic does not exist or its end is not reached within a minute
     */
    public static void read(String bootstrapServers, String topic, Consumer<ConsumerRecord<byte[], byte[]>> reader) {
        Map<String, Object> properties = Map.of(
                ConsumerConfig.BOOTSTRAP_SERVERS_CONFIG,
                bootstrapServers,
                ConsumerConfig.ISOLATION_LEVEL_CONFIG,
                "read_committed",
                ConsumerConfig.ENABLE_AUTO_COMMIT_CONFIG,
                false,
                ConsumerConfig.ALLOW_AUTO_CREATE_TOPICS_CONFIG,
                false,
                ConsumerConfig.CLIENT_ID_CONFIG,
                "northwater-check");
        try (KafkaConsumer<byte[], byte[]> consumer =
                new KafkaConsumer<>(properties, new ByteArrayDeserializer(), new ByteArrayDeserializer())) {
            List<TopicPartition> partitions = consumer.partitionsFor(topic).stream()
                    .map(info -> new TopicPartition(topic, info.partition()))
                    .toList();
            if (partitions.isEmpty()) {
                throw new IllegalStateException("topic " + topic + ": not there (did the monitor start?)");
            }
            consumer.assign(partitions);
            consumer.seekToBeginning(partitions);
            drain(consumer, topic, reader);
        }
    }

    private static void drain(
            KafkaConsumer<byte[], byte[]> consumer, String topic, Consumer<ConsumerRecord<byte[], byte[]>> reader) {
        Map<TopicPartition, Long> ends = consumer.endOffsets(consumer.assignment());
        long deadline = System.nanoTime() + PATIENCE.toNanos();
        while (ends.entrySet().stream().anyMatch(end -> consumer.position(end.getKey()) < end.getValue())) {
            if (System.nanoTime() > deadline) {
                throw new IllegalStateException(
                        "topic " + topic + ": its end was not reached within " + PATIENCE.toSeconds() + " s");
            }
            for (ConsumerRecord<byte[], byte[]> record : consumer.poll(POLL)) {
                // A record without a value says nothing; it only carried the end of a transaction.
                if (record.value() != null) {
                    reader.accept(record);
                }
            }
        }
    }
}
