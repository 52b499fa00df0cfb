package io.tallyward.connector.kafka;

import java.time.Duration;
import java.time.Instant;
import java.util.ArrayList;
import java.util.HashMap;
import java.util.List;
import java.util.Map;
import java.util.Set;
import java.util.TreeMap;
import org.apache.kafka.clients.consumer.Consumer;
import org.apache.kafka.clients.consumer.ConsumerRecord;
import org.apache.kafka.clients.consumer.KafkaConsumer;
import org.apache.kafka.common.KafkaException;
import org.apache.kafka.common.TopicPartition;
import org.apache.kafka.common.serialization.ByteArrayDeserializer;

/**
 * Reads a stretch of the input once more, committed records only, and no further than what was there when the reading began.
 * As a member of no group it changes nothing, and nobody notices.
 */
public final class InputLog {

    private static final Duration POLL = Duration.ofMillis(200);
    private static final Duration PATIENCE = Duration.ofSeconds(30);

    private final Consumer<byte[], byte[]> consumer;
    private final String broker;

    private InputLog(Consumer<byte[], byte[]> consumer, String broker) {
        this.consumer = consumer;
        this.broker = broker;
    }

    /**
     * Hands over every record between two bounds, in the order of each partition; how those of different partitions follow each
     * other is left open.
     *
     * @param clientProperties properties of the Kafka client, {@code bootstrap.servers} among them
     * @param topics the topics, which exist
     * @param from where to begin in each partition
     * @param to where to end in each partition
     * @throws BrokerException if a bound names what the log does not hold, or the broker does not answer, refuses, or gives
     *     nothing for half a minute
     */
    public static void read(
            Map<String, String> clientProperties,
            List<String> topics,
            LogBound from,
            LogBound to,
            java.util.function.Consumer<ConsumerRecord<byte[], byte[]>> records) {
        String broker = clientProperties.get("bootstrap.servers");
        try (Consumer<byte[], byte[]> consumer = new KafkaConsumer<>(
                ClientSettings.once(clientProperties), new ByteArrayDeserializer(), new ByteArrayDeserializer())) {
            List<TopicPartition> partitions = new ArrayList<>();
            topics.forEach(topic -> consumer.partitionsFor(topic)
                    .forEach(info -> partitions.add(new TopicPartition(topic, info.partition()))));
            consumer.assign(partitions);
            InputLog log = new InputLog(consumer, broker);
            Map<TopicPartition, Long> ends = log.seek(Set.copyOf(partitions), from, to);
            log.drain(ends, records);
        } catch (KafkaException failure) {
            throw new BrokerException(BrokerSentence.of(failure, broker).text(), failure);
        }
    }

    /** Goes to the beginning and returns where to end. */
    private Map<TopicPartition, Long> seek(Set<TopicPartition> partitions, LogBound from, LogBound to) {
        Map<TopicPartition, Long> oldest = new TreeMap<>(InputLog::inOrder);
        oldest.putAll(consumer.beginningOffsets(partitions));
        Map<TopicPartition, Long> newest = consumer.endOffsets(partitions);
        Map<TopicPartition, Long> begins = offsets(from, oldest, newest, oldest);
        Map<TopicPartition, Long> ends = offsets(to, oldest, newest, newest);
        ends.replaceAll((partition, end) -> Math.max(end, begins.get(partition)));
        begins.forEach(consumer::seek);
        return ends;
    }

    private static int inOrder(TopicPartition one, TopicPartition other) {
        int order = one.topic().compareTo(other.topic());
        return order != 0 ? order : Integer.compare(one.partition(), other.partition());
    }

    private Map<TopicPartition, Long> offsets(
            LogBound bound,
            Map<TopicPartition, Long> oldest,
            Map<TopicPartition, Long> newest,
            Map<TopicPartition, Long> edge) {
        if (bound instanceof LogBound.At at) {
            return at(at.time(), oldest.keySet(), newest);
        }
        Map<TopicPartition, Long> offsets = new HashMap<>(edge);
        if (bound instanceof LogBound.Offsets named) {
            named.offsets().forEach((partition, offset) -> {
                if (!offsets.containsKey(partition)) {
                    throw new BrokerException("partition " + partition + " is not among those to read "
                            + oldest.keySet() + ": correct the offsets");
                }
                if (!(offset >= oldest.get(partition) && offset <= newest.get(partition))) {
                    throw new BrokerException("offset " + offset + " of " + partition + " (expected: "
                            + oldest.get(partition) + " to " + newest.get(partition) + ", what " + broker
                            + " holds)");
                }
                offsets.put(partition, offset);
            });
        }
        return offsets;
    }

    private Map<TopicPartition, Long> at(
            Instant time, Set<TopicPartition> partitions, Map<TopicPartition, Long> newest) {
        Map<TopicPartition, Long> offsets =
                new HashMap<>(new StartOffsets(consumer, StartPosition.at(time)).of(partitions));
        offsets.replaceAll((partition, offset) -> Math.min(offset, newest.get(partition)));
        return offsets;
    }

    private void drain(
            Map<TopicPartition, Long> ends, java.util.function.Consumer<ConsumerRecord<byte[], byte[]>> records) {
        long idleNanos = 0;
        for (List<TopicPartition> open = open(ends); !open.isEmpty(); open = open(ends)) {
            consumer.pause(ends.keySet().stream()
                    .filter(partition -> consumer.position(partition) >= ends.get(partition))
                    .toList());
            long began = System.nanoTime();
            long before = position(open);
            for (ConsumerRecord<byte[], byte[]> record : consumer.poll(POLL)) {
                if (record.offset() < ends.get(new TopicPartition(record.topic(), record.partition()))) {
                    records.accept(record);
                }
            }
            idleNanos = position(open) == before ? idleNanos + System.nanoTime() - began : 0;
            if (idleNanos > PATIENCE.toNanos()) {
                throw new BrokerException(open + " on " + broker + " gave nothing for " + PATIENCE.toSeconds()
                        + " s before their end was reached: see the broker's log, and try again");
            }
        }
    }

    private List<TopicPartition> open(Map<TopicPartition, Long> ends) {
        return ends.keySet().stream()
                .filter(partition -> consumer.position(partition) < ends.get(partition))
                .toList();
    }

    private long position(List<TopicPartition> partitions) {
        return partitions.stream().mapToLong(consumer::position).sum();
    }
}
