package io.tallyward.connector.kafka;

import static io.tallyward.connector.kafka.CountingShard.bytes;
import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertNull;

import io.tallyward.testkit.BrokerUnderTest;
import java.time.Duration;
import java.util.List;
import java.util.Map;
import java.util.concurrent.TimeUnit;
import org.apache.kafka.clients.admin.Admin;
import org.apache.kafka.clients.admin.NewPartitions;
import org.apache.kafka.clients.producer.ProducerRecord;
import org.apache.kafka.common.KafkaFuture;
import org.awaitility.Awaitility;
import org.junit.jupiter.api.AfterAll;
import org.junit.jupiter.api.BeforeAll;
import org.junit.jupiter.api.Test;
import org.junit.jupiter.params.ParameterizedClass;
import org.junit.jupiter.params.provider.EnumSource;

/** Input topics that change while they are read: nothing is counted that is not certain, and what to do is said. */
@ParameterizedClass
@EnumSource(GroupProtocol.class)
class ChangedTopicIT {

    private static final Duration PATIENCE = Duration.ofSeconds(60);

    private static BrokerUnderTest broker;
    private static Admin admin;

    private final CountingBench bench;

    ChangedTopicIT(GroupProtocol protocol) {
        bench = new CountingBench(broker, protocol, 1);
    }

    @BeforeAll
    static void connect() {
        broker = BrokerUnderTest.start();
        admin = Admin.create(Map.of("bootstrap.servers", broker.bootstrapServers()));
    }

    @AfterAll
    static void disconnect() {
        admin.close(Duration.ofSeconds(1));
        broker.close();
    }

    @Test
    void refusesToGoOnWhenPartitionsWereAdded() throws Exception {
        try (ShardRunner runner = bench.run()) {
            bench.produce(40);
            bench.awaitTold(40);
            done(admin.createPartitions(Map.of(bench.input, NewPartitions.increaseTo(6)))
                    .all());
            awaitError(
                    runner,
                    "topic " + bench.states + " has 4 partitions on " + broker.bootstrapServers() + " (expected: 6)");
            bench.produce(40);
            assertEquals(List.of(), runner.status().partitions());
        }
        assertEquals(40, bench.told());
        assertNull(bench.fatal.get());
    }

    /** With a topic Kafka deletes its committed offsets, so that nothing says how far the counts go. */
    @Test
    void waitsForATopicThatWasDeletedAndRefusesItsSuccessor() throws Exception {
        try (ShardRunner runner = bench.run()) {
            bench.produce(40);
            bench.awaitTold(40);
            done(admin.deleteTopics(List.of(bench.input)).all());
            awaitError(runner, "input topic " + bench.input + " does not exist");
            broker.createTopic(bench.input, CountingBench.PARTITIONS, Map.of());
            broker.produce(List.of(new ProducerRecord<>(bench.input, 0, bytes("quay-banner"), bytes("40"))));
            Awaitility.await().atMost(PATIENCE).until(() -> bench.fatal.get() instanceof LostOffsetsException);
        }
        assertEquals(40, bench.told());
    }

    @Test
    void addsASuccessorOnceAnOperatorHasSetTheOffsetsBack() throws Exception {
        try (ShardRunner runner = bench.run()) {
            bench.produce(40);
            bench.awaitTold(40);
            assertEquals(4, runner.status().partitions().size());
        }
        done(admin.deleteTopics(List.of(bench.input)).all());
        Awaitility.await()
                .atMost(PATIENCE)
                .ignoreExceptions()
                .untilAsserted(() -> broker.createTopic(bench.input, CountingBench.PARTITIONS, Map.of()));
        broker.produce(List.of(new ProducerRecord<>(bench.input, 0, bytes("quay-banner"), bytes("40"))));
        done(admin.alterConsumerGroupOffsets(bench.group, bench.beginnings()).all());
        try (ShardRunner runner = bench.run()) {
            bench.awaitTold(41);
            assertEquals(1, runner.status().recordsConsumed());
        }
    }

    private static void awaitError(ShardRunner runner, String beginning) {
        Awaitility.await()
                .atMost(PATIENCE)
                .until(
                        () -> runner.status().workers().get(0).lastError().orElse(""),
                        error -> error.startsWith(beginning));
    }

    private static void done(KafkaFuture<?> answer) throws Exception {
        answer.get(PATIENCE.toSeconds(), TimeUnit.SECONDS);
    }
}
