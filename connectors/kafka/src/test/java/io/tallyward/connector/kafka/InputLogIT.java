package io.tallyward.connector.kafka;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertThrows;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.testkit.BrokerUnderTest;
import java.nio.charset.StandardCharsets;
import java.time.Instant;
import java.util.ArrayList;
import java.util.List;
import java.util.Map;
import org.apache.kafka.clients.producer.ProducerRecord;
import org.apache.kafka.common.TopicPartition;
import org.junit.jupiter.api.Test;

class InputLogIT {

    private static final LogBound EDGE = new LogBound.Edge();
    private static final Instant NOON = Instant.parse("2026-05-04T12:00:00Z");

    /** Two partitions of five records, one a minute, from noon on. */
    private static String topic(BrokerUnderTest broker) {
        String topic = broker.newTopic("events", 2);
        List<ProducerRecord<byte[], byte[]>> records = new ArrayList<>();
        for (int i = 0; i < 5; i++) {
            for (int partition = 0; partition < 2; partition++) {
                byte[] value = (partition + ":" + i).getBytes(StandardCharsets.UTF_8);
                long timestamp = NOON.plusSeconds(60L * i).toEpochMilli();
                records.add(new ProducerRecord<>(topic, partition, timestamp, null, value));
            }
        }
        broker.produce(records);
        return topic;
    }

    private static List<String> read(BrokerUnderTest broker, String topic, LogBound from, LogBound to) {
        List<String> values = new ArrayList<>();
        InputLog.read(
                Map.of("bootstrap.servers", broker.bootstrapServers()),
                List.of(topic),
                from,
                to,
                record -> values.add(new String(record.value(), StandardCharsets.UTF_8)));
        values.sort(null);
        return values;
    }

    private static LogBound at(int minute) {
        return new LogBound.At(NOON.plusSeconds(60L * minute));
    }

    private static LogBound offsets(String topic, int partition, long offset) {
        return new LogBound.Offsets(Map.of(new TopicPartition(topic, partition), offset));
    }

    @Test
    void readsBetweenBoundsTheLaterOneLeftOut() {
        try (BrokerUnderTest broker = BrokerUnderTest.start()) {
            String topic = topic(broker);
            List<String> all = List.of("0:0", "0:1", "0:2", "0:3", "0:4", "1:0", "1:1", "1:2", "1:3", "1:4");
            assertEquals(all, read(broker, topic, EDGE, EDGE));
            assertEquals(List.of("0:2", "0:3", "1:2", "1:3"), read(broker, topic, at(2), at(4)));
            assertEquals(List.of("0:4", "1:4"), read(broker, topic, at(4), at(9)));
            assertEquals(List.of(), read(broker, topic, at(9), EDGE));
            assertEquals(List.of(), read(broker, topic, at(4), at(2)));
            assertEquals(List.of("0:3", "0:4", "1:0"), read(broker, topic, offsets(topic, 0, 3), offsets(topic, 1, 1)));
        }
    }

    @Test
    void refusesBoundsOutsideOfTheLog() {
        try (BrokerUnderTest broker = BrokerUnderTest.start()) {
            String topic = topic(broker);
            BrokerException beyond =
                    assertThrows(BrokerException.class, () -> read(broker, topic, offsets(topic, 0, 6), EDGE));
            assertTrue(
                    beyond.getMessage().startsWith("offset 6 of " + topic + "-0 (expected: 0 to 5"),
                    beyond.getMessage());
            BrokerException missing =
                    assertThrows(BrokerException.class, () -> read(broker, topic, EDGE, offsets(topic, 2, 0)));
            assertTrue(
                    missing.getMessage().startsWith("partition " + topic + "-2 is not among those to read"),
                    missing.getMessage());
        }
    }
}
