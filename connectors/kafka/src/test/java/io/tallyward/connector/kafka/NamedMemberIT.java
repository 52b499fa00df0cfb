package io.tallyward.connector.kafka;

import static org.junit.jupiter.api.Assertions.assertEquals;

import io.tallyward.testkit.BrokerUnderTest;
import java.time.Duration;
import java.util.Map;
import java.util.Optional;
import java.util.UUID;
import org.apache.kafka.clients.consumer.KafkaConsumer;
import org.apache.kafka.clients.consumer.OffsetAndMetadata;
import org.apache.kafka.clients.producer.KafkaProducer;
import org.apache.kafka.clients.producer.ProducerRecord;
import org.apache.kafka.common.TopicPartition;
import org.apache.kafka.common.serialization.ByteArrayDeserializer;
import org.apache.kafka.common.serialization.ByteArraySerializer;
import org.awaitility.Awaitility;
import org.junit.jupiter.api.AfterAll;
import org.junit.jupiter.api.BeforeAll;
import org.junit.jupiter.api.Test;

/** Instances that keep their name: a successor need not wait for the session of its predecessor to end. */
class NamedMemberIT {

    /** Longer than anything here waits. */
    private static final String SESSION_MILLIS = "300000";

    private static BrokerUnderTest broker;

    private final CountingBench bench = new CountingBench(broker);

    @BeforeAll
    static void connect() {
        broker = BrokerUnderTest.start();
    }

    @AfterAll
    static void disconnect() {
        broker.close();
    }

    private ShardRunner named() {
        return bench.run(builder -> builder.member(Optional.of("pier"))
                .clientProperties(Map.of("session.timeout.ms", SESSION_MILLIS))
                .workers(2));
    }

    @Test
    void takesItsPartitionsFromAPredecessorThatStillRunsAndShutsItOut() {
        bench.produce(200);
        try (ShardRunner predecessor = named()) {
            bench.awaitRunning(predecessor, 4);
            bench.awaitTold(100);
            try (ShardRunner successor = named()) {
                bench.awaitRunning(successor, 4);
                bench.produce(200);
                Awaitility.await().atMost(CountingBench.PATIENCE).until(() -> bench.fatal.get() != null);
                assertEquals(
                        "another instance has started as pier in group " + bench.group
                                + ": this one stops; give every instance that runs a kafka.instance of its own",
                        bench.fatal.get().getMessage());
                bench.produce(200);
                bench.assertExact();
            }
        }
    }

    /** A transaction that is left open by a kill would hold its successor back until it times out. */
    @Test
    void doesNotWaitForATransactionThatItsPredecessorLeftOpen() {
        bench.produce(200);
        try (ShardRunner first = named()) {
            bench.awaitRunning(first, 4);
            bench.awaitTold(200);
        }
        TopicPartition input = new TopicPartition(bench.input, 0);
        try (KafkaProducer<byte[], byte[]> killed = new KafkaProducer<>(
                        Map.of(
                                "bootstrap.servers",
                                broker.bootstrapServers(),
                                "transactional.id",
                                bench.group + "-pier." + UUID.randomUUID() + "-0-1",
                                "transaction.timeout.ms",
                                "45000"),
                        new ByteArraySerializer(),
                        new ByteArraySerializer());
                KafkaConsumer<byte[], byte[]> stranger = new KafkaConsumer<>(
                        Map.of("bootstrap.servers", broker.bootstrapServers(), "group.id", bench.group),
                        new ByteArrayDeserializer(),
                        new ByteArrayDeserializer())) {
            killed.initTransactions();
            killed.beginTransaction();
            killed.send(new ProducerRecord<>(bench.states, 0, CountingShard.bytes("quay-banner"), null));
            killed.sendOffsetsToTransaction(Map.of(input, new OffsetAndMetadata(0)), stranger.groupMetadata());
            killed.flush();
            try (ShardRunner successor = named()) {
                bench.awaitRunning(successor, 4);
                bench.produce(100);
                bench.assertExact();
            }
            killed.close(Duration.ZERO);
        }
    }

    @Test
    void leavesAtOnceWhenItStopsInOrder() {
        bench.produce(200);
        ShardRunner first = named();
        bench.awaitRunning(first, 4);
        first.close();
        try (ShardRunner other = bench.run(builder ->
                builder.member(Optional.of("quay")).clientProperties(Map.of("session.timeout.ms", SESSION_MILLIS)))) {
            bench.awaitRunning(other, 4);
            bench.produce(100);
            bench.assertExact();
        }
    }
}
