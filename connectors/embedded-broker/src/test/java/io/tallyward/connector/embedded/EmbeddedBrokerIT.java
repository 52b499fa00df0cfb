package io.tallyward.connector.embedded;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertThrows;
import static org.junit.jupiter.api.Assertions.assertTrue;

import java.io.IOException;
import java.net.InetAddress;
import java.net.ServerSocket;
import java.nio.file.Path;
import java.time.Duration;
import java.util.ArrayList;
import java.util.List;
import java.util.Map;
import java.util.Optional;
import java.util.concurrent.ExecutionException;
import org.apache.kafka.clients.admin.Admin;
import org.apache.kafka.clients.admin.NewTopic;
import org.apache.kafka.clients.consumer.KafkaConsumer;
import org.apache.kafka.clients.producer.KafkaProducer;
import org.apache.kafka.clients.producer.ProducerRecord;
import org.apache.kafka.common.TopicPartition;
import org.apache.kafka.common.errors.UnknownTopicOrPartitionException;
import org.apache.kafka.common.serialization.StringDeserializer;
import org.apache.kafka.common.serialization.StringSerializer;
import org.junit.jupiter.api.Test;
import org.junit.jupiter.api.io.TempDir;

class EmbeddedBrokerIT {

    private static final TopicPartition TRIP = new TopicPartition("crossings", 0);
    private static final long OLD_EVENT_TIME = 1_000_000_000_000L;

    @TempDir
    Path directory;

    @Test
    void keepsCommittedRecordsAcrossARestart() throws Exception {
        int port;
        try (EmbeddedBroker broker = EmbeddedBroker.start(directory)) {
            port = Integer.parseInt(broker.bootstrapServers().split(":")[1]);
            createTopic(broker);
            produceInOneTransaction(broker, "first");
        }
        try (EmbeddedBroker broker = EmbeddedBroker.start(directory, port)) {
            assertEquals("127.0.0.1:" + port, broker.bootstrapServers());
            produceInOneTransaction(broker, "second");
            assertEquals(List.of("first", "second"), consume(broker, 2));
            assertTopicsAreNotCreatedByMention(broker);
        }
    }

    @Test
    void saysWhatToDoWhenThePortIsTaken() throws IOException {
        try (ServerSocket taken = new ServerSocket(0, 1, InetAddress.getByName("127.0.0.1"))) {
            IllegalStateException refusal = assertThrows(
                    IllegalStateException.class, () -> EmbeddedBroker.start(directory, taken.getLocalPort()));
            assertTrue(refusal.getMessage().contains("stop what listens there or choose another port"));
        }
    }

    private static void createTopic(EmbeddedBroker broker) throws Exception {
        try (Admin admin = Admin.create(Map.of("bootstrap.servers", broker.bootstrapServers()))) {
            admin.createTopics(List.of(new NewTopic(TRIP.topic(), Optional.of(1), Optional.empty())))
                    .all()
                    .get();
        }
    }

    private static void assertTopicsAreNotCreatedByMention(EmbeddedBroker broker) {
        try (Admin admin = Admin.create(Map.of("bootstrap.servers", broker.bootstrapServers()))) {
            ExecutionException refusal = assertThrows(
                    ExecutionException.class,
                    () -> admin.describeTopics(List.of("mistyped"))
                            .allTopicNames()
                            .get());
            assertTrue(refusal.getCause() instanceof UnknownTopicOrPartitionException);
        }
    }

    private static void produceInOneTransaction(EmbeddedBroker broker, String value) {
        Map<String, Object> settings =
                Map.of("bootstrap.servers", broker.bootstrapServers(), "transactional.id", "embedded-broker-test");
        try (KafkaProducer<String, String> producer =
                new KafkaProducer<>(settings, new StringSerializer(), new StringSerializer())) {
            producer.initTransactions();
            producer.beginTransaction();
            producer.send(new ProducerRecord<>(TRIP.topic(), 0, OLD_EVENT_TIME, null, value));
            producer.commitTransaction();
        }
    }

    private static List<String> consume(EmbeddedBroker broker, int count) {
        Map<String, Object> settings =
                Map.of("bootstrap.servers", broker.bootstrapServers(), "isolation.level", "read_committed");
        List<String> values = new ArrayList<>();
        try (KafkaConsumer<String, String> consumer =
                new KafkaConsumer<>(settings, new StringDeserializer(), new StringDeserializer())) {
            consumer.assign(List.of(TRIP));
            consumer.seekToBeginning(List.of(TRIP));
            for (int poll = 0; poll < 50 && values.size() < count; poll++) {
                consumer.poll(Duration.ofMillis(200)).forEach(record -> values.add(record.value()));
            }
        }
        return values;
    }
}
