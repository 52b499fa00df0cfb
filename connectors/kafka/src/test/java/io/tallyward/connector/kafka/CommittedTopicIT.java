package io.tallyward.connector.kafka;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertThrows;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.testkit.BrokerUnderTest;
import java.nio.charset.StandardCharsets;
import java.util.ArrayList;
import java.util.List;
import java.util.Map;
import org.apache.kafka.clients.producer.KafkaProducer;
import org.apache.kafka.clients.producer.ProducerRecord;
import org.apache.kafka.common.serialization.ByteArraySerializer;
import org.junit.jupiter.api.Test;

class CommittedTopicIT {

    private static Map<String, String> properties(BrokerUnderTest broker) {
        return Map.of("bootstrap.servers", broker.bootstrapServers());
    }

    private static List<String> read(BrokerUnderTest broker, String topic) {
        List<String> values = new ArrayList<>();
        CommittedTopic.read(properties(broker), topic, value -> values.add(new String(value, StandardCharsets.UTF_8)));
        return values;
    }

    @Test
    void handsOverWhatWasCommittedInTheOrderOfEachPartition() {
        try (BrokerUnderTest broker = BrokerUnderTest.start()) {
            String topic = broker.newTopic("decisions", 2);
            assertEquals(List.of(), read(broker, topic));
            write(broker, topic, true, "a1", "a2");
            write(broker, topic, false, "aborted");
            write(broker, topic, true, "a3");
            broker.produce(topic, 1, new byte[] {1}, "b1".getBytes(StandardCharsets.UTF_8));
            broker.produce(topic, 1, new byte[] {1}, null);
            List<String> values = read(broker, topic);
            assertEquals(4, values.size(), values::toString);
            values.remove("b1");
            assertEquals(List.of("a1", "a2", "a3"), values);
        }
    }

    private static void write(BrokerUnderTest broker, String topic, boolean commit, String... values) {
        Map<String, Object> settings =
                Map.of("bootstrap.servers", broker.bootstrapServers(), "transactional.id", broker.uniqueName("writer"));
        try (KafkaProducer<byte[], byte[]> producer =
                new KafkaProducer<>(settings, new ByteArraySerializer(), new ByteArraySerializer())) {
            producer.initTransactions();
            producer.beginTransaction();
            for (String value : values) {
                producer.send(new ProducerRecord<>(topic, 0, null, value.getBytes(StandardCharsets.UTF_8)));
            }
            if (commit) {
                producer.commitTransaction();
            } else {
                producer.flush();
                producer.abortTransaction();
            }
        }
    }

    @Test
    void saysThatATopicIsNotThere() {
        try (BrokerUnderTest broker = BrokerUnderTest.start()) {
            String topic = broker.uniqueName("missing");
            BrokerException refusal = assertThrows(BrokerException.class, () -> read(broker, topic));
            assertTrue(refusal.getMessage().startsWith("topic " + topic + " does not exist on "), refusal.getMessage());
        }
    }
}
