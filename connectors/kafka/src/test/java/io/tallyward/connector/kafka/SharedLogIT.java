package io.tallyward.connector.kafka;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertThrows;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.testkit.BrokerUnderTest;
import java.nio.charset.StandardCharsets;
import java.time.Clock;
import java.time.Duration;
import java.util.List;
import java.util.Map;
import java.util.concurrent.CopyOnWriteArrayList;
import java.util.stream.IntStream;
import org.apache.kafka.clients.admin.Admin;
import org.awaitility.Awaitility;
import org.junit.jupiter.api.Test;

class SharedLogIT {

    private static final Duration PATIENCE = Duration.ofSeconds(30);

    private static SharedLog.Entry entry(String value) {
        return new SharedLog.Entry(bytes("quay-banner"), bytes(value));
    }

    private static byte[] bytes(String text) {
        return text.getBytes(StandardCharsets.UTF_8);
    }

    private static SharedLog start(BrokerUnderTest broker, String topic, List<String> read) {
        return SharedLog.start(
                Map.of("bootstrap.servers", broker.bootstrapServers()),
                topic,
                Clock.systemUTC(),
                entry -> read.add(new String(entry.value(), StandardCharsets.UTF_8)));
    }

    @Test
    void allReadTheSameEntriesInTheSameOrderAndTheirOwnAtOnce() {
        try (BrokerUnderTest broker = BrokerUnderTest.start()) {
            String topic = broker.uniqueName("plans");
            List<String> first = new CopyOnWriteArrayList<>();
            List<String> second = new CopyOnWriteArrayList<>();
            try (SharedLog one = start(broker, topic, first);
                    SharedLog other = start(broker, topic, second)) {
                one.append(List.of(entry("a"), entry("b")), PATIENCE);
                assertEquals(List.of("a", "b"), first);
                other.append(List.of(entry("c")), PATIENCE);
                assertEquals(List.of("a", "b", "c"), second);

                IntStream.range(0, 40)
                        .parallel()
                        .forEach(i -> (i % 2 == 0 ? one : other).append(List.of(entry("d" + i)), PATIENCE));
                one.catchUp(PATIENCE);
                other.catchUp(PATIENCE);
                assertEquals(43, first.size());
                assertEquals(first, second);
                assertEquals(WorkerState.RUNNING, one.status().state());
            }
            List<String> later = new CopyOnWriteArrayList<>();
            try (SharedLog again = start(broker, topic, later)) {
                again.catchUp(PATIENCE);
                assertEquals(first, later);
            }
        }
    }

    @Test
    void whatOthersAppendIsReadWithoutBeingAskedFor() {
        try (BrokerUnderTest broker = BrokerUnderTest.start()) {
            String topic = broker.uniqueName("plans");
            List<String> read = new CopyOnWriteArrayList<>();
            try (SharedLog log = start(broker, topic, read)) {
                log.catchUp(PATIENCE);
                broker.produce(topic, 0, bytes("quay-banner"), bytes("from elsewhere"));
                Awaitility.await().atMost(PATIENCE).until(() -> read.size() == 1);
            }
        }
    }

    @Test
    void whereNoBrokerAnswersItSaysSoAndGoesOnTrying() {
        try (SharedLog log = SharedLog.start(
                Map.of(
                        "bootstrap.servers", "127.0.0.1:1",
                        "default.api.timeout.ms", "500",
                        "request.timeout.ms", "400"),
                "plans",
                Clock.systemUTC(),
                entry -> {})) {
            BrokerException silent = assertThrows(BrokerException.class, () -> log.catchUp(Duration.ofMillis(1_500)));
            assertTrue(silent.getMessage().contains("127.0.0.1:1"), silent.getMessage());
            assertTrue(log.status().confirmed().isEmpty());
        }
    }

    @Test
    void anEntryThatCannotBeReadEndsItForGood() {
        try (BrokerUnderTest broker = BrokerUnderTest.start()) {
            String topic = broker.uniqueName("plans");
            try (SharedLog log = SharedLog.start(
                    Map.of("bootstrap.servers", broker.bootstrapServers()), topic, Clock.systemUTC(), entry -> {
                        throw new IllegalStateException("written by a later version");
                    })) {
                assertThrows(BrokerException.class, () -> log.append(List.of(entry("a")), PATIENCE));
                Awaitility.await().atMost(PATIENCE).until(() -> log.status().state() == WorkerState.FAILED);
                assertEquals(
                        topic + "-0@0 cannot be read: written by a later version",
                        log.status().lastError().orElseThrow());
                assertThrows(BrokerException.class, () -> log.catchUp(PATIENCE));
            }
        }
    }

    @Test
    void anotherTopicOfTheSameNameIsNotReadOn() throws Exception {
        try (BrokerUnderTest broker = BrokerUnderTest.start();
                Admin admin = Admin.create(Map.of("bootstrap.servers", broker.bootstrapServers()))) {
            String topic = broker.uniqueName("plans");
            List<String> read = new CopyOnWriteArrayList<>();
            try (SharedLog log = start(broker, topic, read)) {
                log.append(List.of(entry("a")), PATIENCE);
                admin.deleteTopics(List.of(topic)).all().get();
                try (SharedLog other = start(broker, topic, new CopyOnWriteArrayList<>())) {
                    Awaitility.await()
                            .atMost(PATIENCE)
                            .untilAsserted(() -> other.append(List.of(entry("b"), entry("c")), Duration.ofSeconds(5)));
                }
                Awaitility.await().atMost(PATIENCE).until(() -> log.status().state() == WorkerState.BROKER_UNREACHABLE);
                BrokerException removed = assertThrows(BrokerException.class, () -> log.catchUp(PATIENCE));
                assertTrue(removed.getMessage().contains("removed and created anew"), removed.getMessage());
                assertEquals(List.of("a"), read);
            }
        }
    }
}
