package io.tallyward.connector.kafka;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertTimeoutPreemptively;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.engine.shard.RefusedStateException;
import java.time.Clock;
import java.time.Duration;
import java.util.List;
import java.util.Map;
import java.util.Optional;
import java.util.concurrent.CountDownLatch;
import java.util.concurrent.Executor;
import java.util.concurrent.atomic.AtomicReference;
import java.util.function.UnaryOperator;
import org.apache.kafka.clients.consumer.Consumer;
import org.apache.kafka.clients.producer.MockProducer;
import org.apache.kafka.clients.producer.Producer;
import org.apache.kafka.common.TopicPartition;
import org.apache.kafka.common.errors.InterruptException;
import org.apache.kafka.common.serialization.ByteArraySerializer;
import org.awaitility.Awaitility;
import org.junit.jupiter.api.Test;

/** Ends of a runner in real time, against brokers that take a call and never return from it. */
class ShardRunnerStopIT {

    private static final TopicPartition VIEWS = new TopicPartition("crossings", 0);

    private final AtomicReference<Throwable> fatal = new AtomicReference<>();
    private final ScriptedClients scripted = new ScriptedClients();

    @Test
    void stopsWithinItsBoundAlthoughNobodyAnswersItsFirstQuestion() {
        ShardRunner runner = run(new HangingClients(true), builder -> builder);
        assertTimeoutPreemptively(Duration.ofSeconds(6), runner::close);
        assertEquals(List.of(), runner.status().partitions());
    }

    @Test
    void stopsWithinItsBoundAlthoughItsLastCommitIsNeverAnswered() {
        assign();
        ShardRunner runner = run(new HangingClients(false), builder -> builder.commitInterval(Duration.ofMinutes(1)));
        Awaitility.await()
                .atMost(CountingBench.PATIENCE)
                .until(() -> runner.status().partitions().equals(List.of(0)));
        assertTimeoutPreemptively(Duration.ofSeconds(16), runner::close);
    }

    @Test
    void stopsForGoodAndSaysSoWhenStateIsRefused() {
        assign();
        scripted.state("states", 0, 0, "quay-banner", "1");
        try (ShardRunner runner = run(
                scripted,
                builder -> builder.shards((partition, partitions) -> {
                    throw new Refused();
                }))) {
            Awaitility.await().atMost(CountingBench.PATIENCE).until(() -> fatal.get() != null);
            WorkerStatus worker = runner.status().workers().get(0);
            assertEquals(WorkerState.FAILED, worker.state());
            assertEquals(Optional.of(Refused.SENTENCE), worker.lastError());
        }
        assertTrue(scripted.input.closed());
        assertEquals(0, scripted.producer().commitCount());
    }

    private void assign() {
        scripted.topics.put("crossings", 1);
        scripted.topics.put("states", 1);
        scripted.input.schedulePollTask(() -> {
            scripted.input.updateBeginningOffsets(Map.of(VIEWS, 0L));
            scripted.input.updateEndOffsets(Map.of(VIEWS, 0L));
            scripted.input.rebalance(List.of(VIEWS));
        });
    }

    private ShardRunner run(Clients clients, UnaryOperator<ShardGroup.Builder> changes) {
        ShardGroup group = changes.apply(ShardGroup.builder("counters")
                        .bootstrapServers("127.0.0.1:9092")
                        .inputTopics(List.of("crossings"))
                        .stateTopic("states")
                        .shards((partition, partitions) -> new CountingShard("states", "told", partition, line -> {})))
                .build();
        return ShardRunner.start(group, Clock.systemUTC(), (name, cause) -> fatal.set(cause), worker -> clients);
    }

    private static void hang() {
        try {
            new CountDownLatch(1).await();
        } catch (InterruptedException interrupted) {
            throw new InterruptException(interrupted);
        }
    }

    private static final class Refused extends RefusedStateException {
        private static final long serialVersionUID = 1L;
        private static final String SENTENCE = "the plan of quay-banner differs from the one it was counted under";

        private Refused() {
            super(SENTENCE);
        }
    }

    /** Nobody answers the first question, or the commit. */
    private final class HangingClients implements Clients {
        private final boolean atOnce;

        private HangingClients(boolean atOnce) {
            this.atOnce = atOnce;
        }

        @Override
        public Cluster cluster() {
            if (atOnce) {
                hang();
            }
            return scripted.cluster();
        }

        @Override
        public boolean isPredecessor(String transactionalId) {
            return false;
        }

        @Override
        public Executor aside() {
            return scripted.aside();
        }

        @Override
        public Consumer<byte[], byte[]> input() {
            return scripted.input();
        }

        @Override
        public Consumer<byte[], byte[]> state() {
            return scripted.state();
        }

        @Override
        public Producer<byte[], byte[]> output() {
            return new MockProducer<>(true, null, new ByteArraySerializer(), new ByteArraySerializer()) {
                @Override
                public void commitTransaction() {
                    hang();
                }
            };
        }

        @Override
        public Optional<String> lastTransactionalId() {
            return Optional.empty();
        }

        @Override
        public Producer<byte[], byte[]> standIn(String transactionalId) {
            return scripted.standIn(transactionalId);
        }
    }
}
