package io.tallyward.connector.kafka;

import static io.tallyward.connector.kafka.CountingShard.bytes;
import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertNull;

import io.tallyward.connector.embedded.EmbeddedBroker;
import java.io.IOException;
import java.net.InetAddress;
import java.net.ServerSocket;
import java.nio.file.Path;
import java.time.Clock;
import java.time.Duration;
import java.util.List;
import java.util.Map;
import java.util.Optional;
import java.util.concurrent.ConcurrentHashMap;
import java.util.concurrent.atomic.AtomicReference;
import java.util.concurrent.locks.LockSupport;
import org.apache.kafka.clients.admin.TransactionState;
import org.apache.kafka.clients.consumer.ConsumerGroupMetadata;
import org.apache.kafka.clients.consumer.OffsetAndMetadata;
import org.apache.kafka.clients.producer.KafkaProducer;
import org.apache.kafka.clients.producer.ProducerRecord;
import org.apache.kafka.common.KafkaException;
import org.apache.kafka.common.TopicPartition;
import org.apache.kafka.common.serialization.ByteArraySerializer;
import org.awaitility.Awaitility;
import org.junit.jupiter.api.Assumptions;
import org.junit.jupiter.api.io.TempDir;
import org.junit.jupiter.params.ParameterizedTest;
import org.junit.jupiter.params.provider.ValueSource;

/**
 * A broker that is stopped while a transaction is being ended, and that afterwards believes it ended while it hangs in every
 * partition. Whether a stop meets the moment is a matter of luck, so it is tried several times.
 */
class HangingTransactionIT {

    private static final Duration PATIENCE = Duration.ofSeconds(90);
    private static final int TRIES = 12;
    private static final TopicPartition STATES = new TopicPartition("states", 0);
    private static final TopicPartition OFFSETS = new TopicPartition("__consumer_offsets", 0);

    @TempDir
    Path directory;

    private final AtomicReference<Throwable> fatal = new AtomicReference<>();
    private final Map<Integer, CountingShard> latest = new ConcurrentHashMap<>();

    @ParameterizedTest
    @ValueSource(booleans = {true, false})
    void isEndedAsItsCoordinatorHasDecided(boolean commit) throws Exception {
        int port = freePort();
        String address = "127.0.0.1:" + port;
        EmbeddedBroker broker = EmbeddedBroker.start(directory, port);
        try {
            produce(address, 10);
            try (ShardRunner runner = run(address)) {
                awaitCount(runner, 10);
            }
            produce(address, 5);
            boolean hangs = false;
            long counted = 10;
            for (int attempt = 1; attempt <= TRIES && !hangs; attempt++) {
                KafkaProducer<byte[], byte[]> dying = begin(address, "counters-dead-0-" + attempt, 1000 + attempt);
                Thread ending = ending(dying, commit);
                LockSupport.parkNanos(Duration.ofMillis(1 + attempt / 2).toNanos());
                broker.close();
                broker = EmbeddedBroker.start(directory, port);
                ending.join();
                dying.close(Duration.ZERO);
                hangs = hangs(address, "counters-dead-0-" + attempt, commit);
                counted = commit ? 1000 + attempt : 10;
            }
            Assumptions.assumeTrue(hangs, "no stop of the broker met the moment");
            try (ShardRunner runner = run(address)) {
                produce(address, 5);
                // What was committed had read 15 records, what was aborted none of the last five of them.
                awaitCount(runner, commit ? counted + 5 : 20);
                assertEquals(List.of(), openTransactions(address));
            }
            assertNull(fatal.get());
        } finally {
            broker.close();
        }
    }

    private static Thread ending(KafkaProducer<byte[], byte[]> producer, boolean commit) {
        Thread thread = new Thread(() -> {
            try {
                if (commit) {
                    producer.commitTransaction();
                } else {
                    producer.abortTransaction();
                }
            } catch (KafkaException unheard) {
                // the broker knows how it ended
            }
        });
        thread.start();
        return thread;
    }

    @SuppressWarnings("removal") // a member of the group would have to be alive
    private static KafkaProducer<byte[], byte[]> begin(String address, String transactionalId, int count) {
        KafkaProducer<byte[], byte[]> producer = new KafkaProducer<>(
                Map.of(
                        "bootstrap.servers",
                        address,
                        "transactional.id",
                        transactionalId,
                        "transaction.timeout.ms",
                        "10000",
                        "max.block.ms",
                        "10000"),
                new ByteArraySerializer(),
                new ByteArraySerializer());
        producer.initTransactions();
        producer.beginTransaction();
        producer.send(new ProducerRecord<>("states", 0, bytes("quay-banner"), bytes(Integer.toString(count))));
        for (int partition = 0; partition < 20; partition++) {
            producer.send(new ProducerRecord<>("told", partition, bytes("quay-banner"), bytes("told")));
        }
        producer.sendOffsetsToTransaction(
                Map.of(new TopicPartition("crossings", 0), new OffsetAndMetadata(15)),
                new ConsumerGroupMetadata("counters"));
        producer.flush();
        return producer;
    }

    private static boolean hangs(String address, String transactionalId, boolean commit) {
        TransactionState end = commit ? TransactionState.COMPLETE_COMMIT : TransactionState.COMPLETE_ABORT;
        try (Cluster cluster = ClientSettings.cluster(Map.of("bootstrap.servers", address))) {
            Awaitility.await()
                    .atMost(PATIENCE)
                    .ignoreExceptions()
                    .until(() -> cluster.coordinated(transactionalId)
                            .filter(CoordinatedTransaction::ended)
                            .isPresent());
            Optional<CoordinatedTransaction> known = cluster.coordinated(transactionalId);
            return known.orElseThrow().state() == end
                    && cluster.openTransactions(List.of(STATES, OFFSETS)).stream()
                                    .filter(open ->
                                            open.producerId() == known.get().producerId())
                                    .count()
                            == 2;
        }
    }

    private static List<OpenTransaction> openTransactions(String address) {
        try (Cluster cluster = ClientSettings.cluster(Map.of("bootstrap.servers", address))) {
            return Awaitility.await()
                    .atMost(PATIENCE)
                    .until(() -> cluster.openTransactions(List.of(STATES, OFFSETS)), List::isEmpty);
        }
    }

    private ShardRunner run(String address) {
        ShardGroup group = ShardGroup.builder("counters")
                .bootstrapServers(address)
                .inputTopics(List.of("crossings"))
                .stateTopic("states")
                .internalTopics(partitions ->
                        List.of(InternalTopic.compacted("states", partitions), InternalTopic.kept("told", 20)))
                .shards((partition, partitions) -> {
                    CountingShard shard = new CountingShard("states", "told", partition, line -> {});
                    latest.put(partition, shard);
                    return shard;
                })
                .commitInterval(Duration.ofMillis(100))
                .build();
        return ShardRunner.start(group, Clock.systemUTC(), (name, cause) -> fatal.set(cause));
    }

    private static void produce(String address, int count) throws Exception {
        Map<String, String> client = Map.of("bootstrap.servers", address);
        InternalTopics.ensure(client, List.of(InternalTopic.kept("crossings", 1)));
        try (KafkaProducer<byte[], byte[]> producer =
                new KafkaProducer<>(Map.copyOf(client), new ByteArraySerializer(), new ByteArraySerializer())) {
            for (int i = 0; i < count; i++) {
                producer.send(new ProducerRecord<>("crossings", 0, bytes("quay-banner"), bytes("view")))
                        .get();
            }
        }
    }

    private void awaitCount(ShardRunner runner, long count) {
        Awaitility.await()
                .atMost(PATIENCE)
                .until(() -> latest.containsKey(0) && latest.get(0).counts().getOrDefault("quay-banner", 0L) == count);
    }

    private static int freePort() throws IOException {
        try (ServerSocket socket = new ServerSocket(0, 1, InetAddress.getByName("127.0.0.1"))) {
            return socket.getLocalPort();
        }
    }
}
