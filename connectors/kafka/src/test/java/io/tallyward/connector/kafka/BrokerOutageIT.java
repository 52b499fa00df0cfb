package io.tallyward.connector.kafka;

import static io.tallyward.connector.kafka.CountingShard.bytes;
import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertNull;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.connector.embedded.EmbeddedBroker;
import java.io.IOException;
import java.net.InetAddress;
import java.net.ServerSocket;
import java.nio.file.Path;
import java.time.Clock;
import java.time.Duration;
import java.util.List;
import java.util.Map;
import java.util.concurrent.ConcurrentHashMap;
import java.util.concurrent.atomic.AtomicReference;
import org.apache.kafka.clients.producer.KafkaProducer;
import org.apache.kafka.clients.producer.ProducerRecord;
import org.apache.kafka.common.serialization.ByteArraySerializer;
import org.awaitility.Awaitility;
import org.junit.jupiter.api.Test;
import org.junit.jupiter.api.io.TempDir;

class BrokerOutageIT {

    private static final Duration PATIENCE = Duration.ofSeconds(45);

    @TempDir
    Path directory;

    private final AtomicReference<Throwable> fatal = new AtomicReference<>();
    private final Map<Integer, CountingShard> latest = new ConcurrentHashMap<>();

    @Test
    void startsWithoutABrokerAndSurvivesItsRestart() throws Exception {
        int port = freePort();
        String address = "127.0.0.1:" + port;
        try (ShardRunner runner =
                ShardRunner.start(group(address), Clock.systemUTC(), (group, cause) -> fatal.set(cause))) {
            awaitError(runner, "the broker at " + address + " does not answer");
            try (EmbeddedBroker broker = EmbeddedBroker.start(directory, port)) {
                awaitError(
                        runner,
                        "input topic crossings does not exist on " + address + ": create it or correct input.topics");
                InternalTopics.ensure(bootstrap(address), List.of(InternalTopic.kept("crossings", 1)));
                awaitState(runner, WorkerState.RUNNING);
                produce(broker, 10);
                awaitCount(10);
            }
            awaitState(runner, WorkerState.BROKER_UNREACHABLE);
            try (EmbeddedBroker broker = EmbeddedBroker.start(directory, port)) {
                produce(broker, 5);
                awaitCount(15);
                awaitState(runner, WorkerState.RUNNING);
                assertTrue(runner.status().healthy());
            }
        }
        assertNull(fatal.get());
    }

    private ShardGroup group(String address) {
        return ShardGroup.builder("counters")
                .bootstrapServers(address)
                .clientProperties(
                        Map.of("default.api.timeout.ms", "3000", "request.timeout.ms", "2000", "max.block.ms", "2000"))
                .inputTopics(List.of("crossings"))
                .stateTopic("states")
                .internalTopics(partitions ->
                        List.of(InternalTopic.compacted("states", partitions), InternalTopic.kept("told", 1)))
                .shards(this::shard)
                .commitInterval(Duration.ofMillis(100))
                .build();
    }

    private HostedShard shard(int partition, int partitions) {
        assertEquals(1, partitions);
        CountingShard shard = new CountingShard("states", "told", partition, line -> {});
        latest.put(partition, shard);
        return shard;
    }

    private static void produce(EmbeddedBroker broker, int count) throws Exception {
        Map<String, Object> settings = Map.of("bootstrap.servers", broker.bootstrapServers());
        try (KafkaProducer<byte[], byte[]> producer =
                new KafkaProducer<>(settings, new ByteArraySerializer(), new ByteArraySerializer())) {
            for (int i = 0; i < count; i++) {
                producer.send(new ProducerRecord<>("crossings", 0, bytes("quay-banner"), bytes("view")))
                        .get();
            }
        }
    }

    private void awaitCount(long count) {
        Awaitility.await()
                .atMost(PATIENCE)
                .until(() -> latest.get(0).counts().getOrDefault("quay-banner", 0L) == count);
    }

    private static void awaitError(ShardRunner runner, String beginning) {
        Awaitility.await()
                .atMost(PATIENCE)
                .until(() ->
                        runner.status().workers().get(0).lastError().orElse("").startsWith(beginning));
    }

    private static void awaitState(ShardRunner runner, WorkerState state) {
        Awaitility.await()
                .atMost(PATIENCE)
                .until(() -> runner.status().workers().get(0).state() == state);
    }

    private static Map<String, String> bootstrap(String address) {
        return Map.of("bootstrap.servers", address);
    }

    private static int freePort() throws IOException {
        try (ServerSocket socket = new ServerSocket(0, 1, InetAddress.getByName("127.0.0.1"))) {
            return socket.getLocalPort();
        }
    }
}
