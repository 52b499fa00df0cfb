package io.tallyward.connector.kafka;

import static io.tallyward.connector.kafka.CountingShard.bytes;
import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.testkit.BrokerUnderTest;
import java.time.Duration;
import java.time.Instant;
import java.util.List;
import java.util.Map;
import java.util.Optional;
import java.util.concurrent.Executor;
import java.util.concurrent.atomic.AtomicInteger;
import java.util.function.Consumer;
import org.apache.kafka.clients.consumer.ConsumerGroupMetadata;
import org.apache.kafka.clients.consumer.OffsetAndMetadata;
import org.apache.kafka.clients.producer.KafkaProducer;
import org.apache.kafka.clients.producer.Producer;
import org.apache.kafka.clients.producer.ProducerRecord;
import org.apache.kafka.common.TopicPartition;
import org.apache.kafka.common.errors.TimeoutException;
import org.apache.kafka.common.serialization.ByteArraySerializer;
import org.awaitility.Awaitility;
import org.junit.jupiter.api.AfterAll;
import org.junit.jupiter.api.BeforeAll;
import org.junit.jupiter.api.Test;
import org.junit.jupiter.params.ParameterizedClass;
import org.junit.jupiter.params.provider.EnumSource;

@ParameterizedClass
@EnumSource(GroupProtocol.class)
class ShardRunnerIT {

    private static BrokerUnderTest broker;

    private final GroupProtocol protocol;
    private final CountingBench bench;

    ShardRunnerIT(GroupProtocol protocol) {
        this.protocol = protocol;
        this.bench = new CountingBench(broker, protocol, 1);
    }

    @BeforeAll
    static void connect() {
        broker = BrokerUnderTest.start();
    }

    @AfterAll
    static void disconnect() {
        broker.close();
    }

    @Test
    void countsExactlyAcrossAStopAndARestart() {
        bench.produce(500);
        try (ShardRunner runner = bench.run(builder -> builder.workers(2))) {
            bench.awaitRunning(runner, 4);
            bench.awaitTold(100);
        }
        bench.produce(300);
        try (ShardRunner runner = bench.run(builder -> builder.workers(2))) {
            bench.assertExact();
            assertEquals(List.of(0, 1, 2, 3), runner.status().partitions());
            assertTrue(runner.status().healthy());
        }
    }

    @Test
    void commitsWhatWasReadWhenItStops() {
        bench.produce(40);
        ShardRunner runner = bench.run(builder -> builder.commitInterval(Duration.ofMinutes(1)));
        Awaitility.await()
                .atMost(CountingBench.PATIENCE)
                .until(() -> runner.status().recordsConsumed() == 40);
        assertEquals(0, bench.told());
        runner.close();
        bench.assertExact();
        assertEquals(WorkerState.STOPPED, runner.status().workers().get(0).state());
    }

    @Test
    void countsExactlyWhileInstancesComeAndGo() {
        ShardRunner first = bench.run();
        bench.awaitRunning(first, 4);
        bench.produce(200);
        try (ShardRunner second = bench.run()) {
            bench.produce(200);
            bench.awaitRunning(second, 2);
            bench.produce(200);
            first.close();
            assertEquals(0, first.status().workers().get(0).aborts());
            bench.produce(200);
            bench.awaitRunning(second, 4);
            bench.assertExact();
        }
    }

    @Test
    void bringsAllInputsOfAPartitionTogetherWhileInstancesComeAndGo() {
        CountingBench two = new CountingBench(broker, protocol, 2);
        two.produce(200);
        ShardRunner first = two.run(builder -> builder.workers(2));
        two.awaitRunning(first, 4);
        two.produce(200);
        try (ShardRunner second = two.run()) {
            two.produce(200);
            Awaitility.await()
                    .atMost(CountingBench.PATIENCE)
                    .until(() -> !second.status().partitions().isEmpty());
            two.produce(200);
            first.close();
            two.produce(200);
            two.awaitRunning(second, 4);
            two.assertExact();
        }
    }

    @Test
    void countsExactlyAfterACommitOfUnknownOutcome() {
        AtomicInteger commits = new AtomicInteger();
        ShardGroup group = bench.group(builder -> builder);
        Clients failing = new FailingClients(new KafkaClients(group, 0), producer -> {
            int commit = commits.incrementAndGet();
            if (commit == 2) {
                throw new TimeoutException("not even sent");
            }
            producer.commitTransaction();
            if (commit == 4) {
                throw new TimeoutException("sent, but nobody heard the answer");
            }
        });
        try (ShardRunner runner = bench.run(group, worker -> failing)) {
            for (int batch = 0; batch < 6; batch++) {
                bench.produce(50);
                bench.awaitTold(50 * (batch + 1));
            }
            bench.assertExact();
            assertEquals(2, runner.status().workers().get(0).aborts());
        }
    }

    @Test
    void countsExactlyAfterItsProducerWasFenced() {
        try (ShardRunner runner = bench.run(builder -> builder.instance("quay"))) {
            bench.produce(100);
            bench.awaitTold(100);
            transactional(bench.group + "-quay-0-1").close();
            bench.produce(100);
            bench.assertExact();
            WorkerStatus worker = runner.status().workers().get(0);
            assertTrue(worker.lastError().orElseThrow().contains("two instances run under one instance name"));
        }
    }

    @Test
    @SuppressWarnings("removal")
    void waitsForAPredecessorsTransactionBeforeItBelievesTheState() {
        broker.createTopic(bench.states, CountingBench.PARTITIONS, Map.of("cleanup.policy", "compact"));
        bench.produce(20);
        try (Producer<byte[], byte[]> predecessor = transactional(bench.group + "-predecessor")) {
            predecessor.beginTransaction();
            predecessor.send(new ProducerRecord<>(bench.states, 0, bytes("quay-banner"), bytes("1000")));
            predecessor.sendOffsetsToTransaction(
                    Map.of(new TopicPartition(bench.input, 0), new OffsetAndMetadata(0)),
                    new ConsumerGroupMetadata(bench.group));
            predecessor.flush();
            try (ShardRunner runner = bench.run()) {
                Awaitility.await()
                        .atMost(CountingBench.PATIENCE)
                        .until(() -> runner.status().workers().get(0).state() == WorkerState.RESTORING);
                assertEquals(0, runner.status().recordsConsumed());
                predecessor.commitTransaction();
                bench.awaitTold(20);
            }
        }
        long counted = broker.readAll(bench.states).stream()
                .filter(record -> record.partition() == 0 && "quay-banner".equals(CountingShard.text(record.key())))
                .mapToLong(record -> Long.parseLong(CountingShard.text(record.value())))
                .max()
                .orElseThrow();
        assertEquals(1001, counted);
    }

    @Test
    void startsWhereItIsTold() {
        broker.produce(List.of(timed(0, "before"), timed(1_000, "at"), timed(2_000, "after")));
        try (ShardRunner runner = bench.run(builder -> builder.start(StartPosition.at(Instant.ofEpochMilli(1_000))))) {
            bench.awaitTold(2);
            assertEquals(2, runner.status().recordsConsumed());
        }
        CountingBench other = new CountingBench(broker, protocol, 1);
        other.produce(40);
        try (ShardRunner runner = other.run(builder -> builder.start(StartPosition.latest()))) {
            other.awaitRunning(runner, 4);
            Awaitility.await()
                    .atMost(CountingBench.PATIENCE)
                    .until(() -> broker.committedOffsets(other.group).size() == 4);
            other.produce(4);
            other.awaitTold(4);
            assertEquals(4, other.told());
        }
    }

    @Test
    void stopsForGoodWhenAShardBreaks() {
        broker.produce(bench.input, 0, bytes("quay-banner"), null);
        try (ShardRunner runner = bench.run()) {
            Awaitility.await().atMost(CountingBench.PATIENCE).until(() -> bench.fatal.get() != null);
            assertEquals(
                    "shard 0 of group " + bench.group + " failed at " + bench.input + "-0@0",
                    bench.fatal.get().getMessage());
            assertEquals(WorkerState.FAILED, runner.status().workers().get(0).state());
            assertTrue(!runner.status().healthy());
        }
    }

    private ProducerRecord<byte[], byte[]> timed(long millis, String value) {
        return new ProducerRecord<>(bench.input, 0, millis, bytes("quay-banner"), bytes(value));
    }

    private static Producer<byte[], byte[]> transactional(String id) {
        Producer<byte[], byte[]> producer = new KafkaProducer<>(
                Map.of("bootstrap.servers", broker.bootstrapServers(), "transactional.id", id),
                new ByteArraySerializer(),
                new ByteArraySerializer());
        producer.initTransactions();
        return producer;
    }

    /** Real clients whose commits go through the test. */
    private record FailingClients(Clients real, Consumer<KafkaProducer<byte[], byte[]>> commit) implements Clients {

        @Override
        public Cluster cluster() {
            return real.cluster();
        }

        @Override
        public boolean isPredecessor(String transactionalId) {
            return real.isPredecessor(transactionalId);
        }

        @Override
        public Executor aside() {
            return real.aside();
        }

        @Override
        public org.apache.kafka.clients.consumer.Consumer<byte[], byte[]> input() {
            return real.input();
        }

        @Override
        public org.apache.kafka.clients.consumer.Consumer<byte[], byte[]> state() {
            return real.state();
        }

        @Override
        public Producer<byte[], byte[]> output() {
            KafkaProducer<byte[], byte[]> producer = (KafkaProducer<byte[], byte[]>) real.output();
            return InterceptedCommits.of(producer, commit);
        }

        @Override
        public Optional<String> lastTransactionalId() {
            return real.lastTransactionalId();
        }

        @Override
        public Producer<byte[], byte[]> standIn(String transactionalId) {
            return real.standIn(transactionalId);
        }
    }
}
