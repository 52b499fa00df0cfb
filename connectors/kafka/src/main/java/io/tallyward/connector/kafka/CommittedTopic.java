package io.tallyward.connector.kafka;

import java.time.Duration;
import java.util.List;
import java.util.Map;
import org.apache.kafka.clients.consumer.Consumer;
import org.apache.kafka.clients.consumer.ConsumerRecord;
import org.apache.kafka.clients.consumer.ConsumerRecords;
import org.apache.kafka.clients.consumer.KafkaConsumer;
import org.apache.kafka.common.KafkaException;
import org.apache.kafka.common.TopicPartition;
import org.apache.kafka.common.serialization.ByteArrayDeserializer;

/** Reads a topic once, from its beginning to the end it has when the reading begins; committed records only. */
public final class CommittedTopic {

    private static final Duration POLL = Duration.ofMillis(200);
    private static final Duration PATIENCE = Duration.ofSeconds(30);

    private CommittedTopic() {}

    /**
     * Hands over the value of every record that has one, in the order of each partition. As a member of no group it changes
     * nothing.
     *
     * @param clientProperties properties of the Kafka client, {@code bootstrap.servers} among them
     * @throws BrokerException if the topic does not exist, or the broker does not answer, refuses, or gives nothing for half a
     *     minute
     */
    public static void read(
            Map<String, String> clientProperties, String topic, java.util.function.Consumer<byte[]> values) {
        String broker = clientProperties.get("bootstrap.servers");
        try (Cluster cluster = ClientSettings.cluster(clientProperties)) {
            Integer partitions = cluster.partitions(List.of(topic)).get(topic);
            if (partitions == null) {
                throw new BrokerException("topic " + topic + " does not exist on " + broker
                        + ": correct the name of the service in the configuration, or the bootstrap servers");
            }
        } catch (KafkaException failure) {
            throw new BrokerException(BrokerSentence.of(failure, broker).text(), failure);
        }
        try (Consumer<byte[], byte[]> consumer = new KafkaConsumer<>(
                ClientSettings.once(clientProperties), new ByteArrayDeserializer(), new ByteArrayDeserializer())) {
            List<TopicPartition> partitions = consumer.partitionsFor(topic).stream()
                    .map(info -> new TopicPartition(topic, info.partition()))
                    .toList();
            consumer.assign(partitions);
            consumer.seekToBeginning(partitions);
            drain(consumer, topic, broker, values);
        } catch (KafkaException failure) {
            throw new BrokerException(BrokerSentence.of(failure, broker).text(), failure);
        }
    }

    private static void drain(
            Consumer<byte[], byte[]> consumer,
            String topic,
            String broker,
            java.util.function.Consumer<byte[]> values) {
        Map<TopicPartition, Long> ends = consumer.endOffsets(consumer.assignment());
        long idleNanos = 0;
        while (ends.entrySet().stream().anyMatch(end -> consumer.position(end.getKey()) < end.getValue())) {
            long began = System.nanoTime();
            long before = positions(consumer);
            ConsumerRecords<byte[], byte[]> records = consumer.poll(POLL);
            for (ConsumerRecord<byte[], byte[]> record : records) {
                if (record.value() != null) {
                    values.accept(record.value());
                }
            }
            idleNanos = positions(consumer) == before ? idleNanos + System.nanoTime() - began : 0;
            if (idleNanos > PATIENCE.toNanos()) {
                throw new BrokerException("topic " + topic + " on " + broker + " gave nothing for "
                        + PATIENCE.toSeconds() + " s before its end was reached: see the broker's log, and try again");
            }
        }
    }

    private static long positions(Consumer<byte[], byte[]> consumer) {
        return consumer.assignment().stream().mapToLong(consumer::position).sum();
    }
}
