package io.tallyward.service.watch;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertTrue;

import com.standardwebhooks.Webhook;
import com.sun.net.httpserver.HttpServer;
import io.tallyward.connector.embedded.EmbeddedBroker;
import io.tallyward.connector.format.DecisionJson;
import io.tallyward.connector.format.EventMapping;
import io.tallyward.connector.format.JsonEventReader;
import io.tallyward.connector.kafka.RunnerListener;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.record.DecisionRecord;
import io.tallyward.engine.record.DecisionRecord.Occasion;
import io.tallyward.engine.record.DecisionRecord.VariantCount;
import io.tallyward.engine.record.SplitOrigin;
import io.tallyward.engine.record.Trust;
import io.tallyward.engine.record.Verdict;
import io.tallyward.service.command.ReplayOracle;
import io.tallyward.service.config.ConfigReader;
import io.tallyward.service.config.ServiceConfig;
import io.tallyward.service.plan.PlanDirectory;
import io.tallyward.testkit.BrokerUnderTest;
import java.io.IOException;
import java.net.InetAddress;
import java.net.InetSocketAddress;
import java.net.ServerSocket;
import java.net.URI;
import java.net.http.HttpClient;
import java.net.http.HttpHeaders;
import java.net.http.HttpRequest;
import java.net.http.HttpResponse;
import java.nio.charset.StandardCharsets;
import java.nio.file.Files;
import java.nio.file.Path;
import java.time.Duration;
import java.time.Instant;
import java.time.InstantSource;
import java.util.ArrayList;
import java.util.Collection;
import java.util.List;
import java.util.Map;
import java.util.Queue;
import java.util.concurrent.ConcurrentLinkedQueue;
import java.util.regex.Pattern;
import org.apache.kafka.clients.consumer.ConsumerRecord;
import org.apache.kafka.clients.producer.ProducerRecord;
import org.awaitility.Awaitility;
import org.junit.jupiter.api.Test;
import org.junit.jupiter.api.io.TempDir;

/** The whole service on a real broker: what it decides live is what a replay of the same log decides. */
class WatchServiceIT {

    private static final int PARTITIONS = 3;
    private static final Duration PATIENCE = Duration.ofSeconds(60);
    private static final String SECRET = "whsec_MfKQ9r8GKYqrTwjUPD8ILPZIo2LaLaSw";

    private static final RunnerListener NOTHING_FATAL = (group, cause) -> {
        throw new AssertionError(group + " failed", cause);
    };

    private final HttpClient http = HttpClient.newHttpClient();

    @TempDir
    private Path directory;

    @Test
    void decidesLiveWhatAReplayOfTheSameLogDecides() throws Exception {
        try (BrokerUnderTest broker = BrokerUnderTest.start();
                Receiver receiver = new Receiver()) {
            String topic = broker.newTopic("northwater-events", PARTITIONS);
            List<ProducerRecord<byte[], byte[]>> stream = LiveStream.of(topic, PARTITIONS, 20261201L);
            ServiceConfig config =
                    config(broker.bootstrapServers(), topic, broker.uniqueName("watch"), receiver.port());
            List<Plan> plans = PlanDirectory.read(config.plans()).orElseThrow();

            int third = stream.size() / 3;
            broker.produce(stream.subList(0, third));
            try (WatchService first = start(config, plans)) {
                awaitReady(first);
                broker.produce(stream.subList(third, 2 * third));
                try (WatchService second = start(config, plans)) {
                    awaitReady(second);
                    broker.produce(stream.subList(2 * third, stream.size()));
                    awaitSettled(first, second);
                }
            }

            List<DecisionRecord> live = decisions(broker, config.name() + "-decisions");
            List<DecisionRecord> replayed = ReplayOracle.decisions(
                    plans, PARTITIONS, broker.readAll(topic), new JsonEventReader(EventMapping.DEFAULT, 65_536));
            assertEquals(of("quay-banner", replayed), of("quay-banner", live));
            assertEquals(of("fare-chip", replayed), of("fare-chip", live));
            assertEquals(of("cabin-upsell", replayed), of("cabin-upsell", live));
            assertNamesTheBrokenVersion(last(of("cabin-upsell", live)));
            assertEquals(Verdict.STOP_BENEFIT, last(of("quay-banner", live)).verdict());
            receiver.awaitNotice("io.tallyward.notice.stop");
            receiver.awaitNotice("\"worstSegment\":\"version 6.3\"");
            assertEquals(13, broker.readAll(config.name() + "-rejects").size(), "rejected records kept");
        }
    }

    /** New, amended and refused plans, while two instances run; one of them has other files than the other. */
    @Test
    void takesUpAmendsAndRefusesPlansWhileItRuns() throws Exception {
        try (BrokerUnderTest broker = BrokerUnderTest.start();
                Receiver receiver = new Receiver()) {
            String topic = broker.newTopic("northwater-events", PARTITIONS);
            List<ProducerRecord<byte[], byte[]>> stream = LiveStream.of(topic, PARTITIONS, 20261203L);
            ServiceConfig config =
                    config(broker.bootstrapServers(), topic, broker.uniqueName("watch"), receiver.port());
            Path quay = config.plans().resolve("quay-banner.yaml");
            Path cabin = config.plans().resolve("cabin-upsell.yaml");
            Files.delete(cabin);
            List<Plan> plans = PlanDirectory.read(config.plans()).orElseThrow();
            InstantSource noon = InstantSource.fixed(LiveStream.START.plus(Duration.ofHours(12)));

            int third = stream.size() / 3;
            List<ProducerRecord<byte[], byte[]>> begun = of("quay-banner", stream.subList(0, third));
            broker.produce(begun);
            try (WatchService first = WatchService.start(config, plans, "test", NOTHING_FATAL, noon);
                    WatchService second = WatchService.start(config, plans, "test", NOTHING_FATAL, noon)) {
                awaitReady(first);
                awaitReady(second);

                Files.writeString(cabin, LiveStream.BROKEN_PLAN);
                Files.writeString(quay, LiveStream.PLAN.replace("alpha: 0.05", "alpha: 0.1"));
                receiver.awaitNotice("test.benefit.alpha is 0.025, not 0.05");
                awaitKnown("cabin-upsell", first, second);

                Files.writeString(quay, LiveStream.PLAN + """
                        amendments:
                          - {at: 2026-05-04T13:00:00Z, reason: the quay is painted, shares: {plain: 0.5, wide: 0.5}}
                          - {at: 2026-05-04T20:00:00Z, reason: the fair begins, end: 2026-05-05T06:00:00Z}
                        """);
                awaitPage("the fair begins", "quay-banner", first, second);
                broker.produce(of("cabin-upsell", stream.subList(0, third)));
                broker.produce(stream.subList(third, stream.size()));
                awaitComplete("quay-banner", LiveStream.START.plus(Duration.ofHours(30)), first, second);
                awaitComplete("cabin-upsell", LiveStream.START.plus(LiveStream.RUN), first, second);
            }

            List<DecisionRecord> live = decisions(broker, config.name() + "-decisions");
            List<DecisionRecord> replayed = ReplayOracle.decisions(
                    PlanDirectory.read(config.plans()).orElseThrow(),
                    PARTITIONS,
                    broker.readAll(topic),
                    new JsonEventReader(EventMapping.DEFAULT, 65_536));
            assertEquals(of("quay-banner", replayed), of("quay-banner", live));
            assertEquals(of("cabin-upsell", replayed), of("cabin-upsell", live));
            assertEquals(
                    2,
                    of("quay-banner", live).stream()
                            .filter(record -> record.occasion() == Occasion.AMENDED)
                            .count());
        }
    }

    private static List<ProducerRecord<byte[], byte[]>> of(
            String experiment, Collection<ProducerRecord<byte[], byte[]>> records) {
        return records.stream()
                .filter(record -> new String(record.value(), StandardCharsets.UTF_8).contains(experiment))
                .toList();
    }

    private void awaitKnown(String experiment, WatchService first, WatchService second) {
        Awaitility.await()
                .atMost(PATIENCE)
                .until(() -> (get(first, "api/experiments").body()
                                + get(second, "api/experiments").body())
                        .contains(experiment));
    }

    private void awaitPage(String words, String experiment, WatchService first, WatchService second) {
        Awaitility.await()
                .atMost(PATIENCE)
                .until(() -> (get(first, "experiments/" + experiment).body()
                                + get(second, "experiments/" + experiment).body())
                        .contains(words));
    }

    private void awaitComplete(String experiment, Instant moment, WatchService first, WatchService second) {
        Pattern complete =
                Pattern.compile("\"experiment\":\"" + experiment + "\"[^{}]*\"completeUntil\":\"" + moment + "\"");
        Awaitility.await().atMost(PATIENCE).untilAsserted(() -> {
            String known = get(first, "api/experiments").body()
                    + get(second, "api/experiments").body();
            assertTrue(complete.matcher(known).find(), known);
        });
    }

    private static void assertNamesTheBrokenVersion(DecisionRecord record) {
        assertEquals(Trust.MISMATCH, record.trust());
        SplitOrigin origin = record.split().origin();
        assertEquals("version", origin.worst().field());
        assertEquals("6.3", origin.worst().value());
        assertTrue(origin.worst().standsOut(), origin.toString());
        Duration off = Duration.between(LiveStream.BREAK, origin.beganFrom()).abs();
        assertTrue(off.compareTo(Duration.ofHours(1)) <= 0, origin.toString());
        VariantCount wide = record.counts().get(1);
        assertEquals(
                wide.trials(),
                origin.worst().units().get(1).units()
                        + origin.worst().elsewhere().get(1).units());
    }

    @Test
    void countsViewsAndClicksOfTwoTopicsAsThoseOfOne() throws Exception {
        try (BrokerUnderTest broker = BrokerUnderTest.start();
                Receiver receiver = new Receiver()) {
            String views = broker.newTopic("northwater-views", PARTITIONS);
            String clicks = broker.newTopic("northwater-clicks", PARTITIONS);
            String one = broker.newTopic("northwater-events", PARTITIONS);
            broker.produce(LiveStream.split(views, clicks, PARTITIONS, 20261202L));
            broker.produce(LiveStream.of(one, PARTITIONS, 20261202L));
            ServiceConfig config = config(
                    broker.bootstrapServers(), views + ", " + clicks, broker.uniqueName("watch"), receiver.port());
            List<Plan> plans = PlanDirectory.read(config.plans()).orElseThrow();
            try (WatchService service = start(config, plans)) {
                awaitSettled(service, service);
            }

            List<DecisionRecord> live = of("quay-banner", decisions(broker, config.name() + "-decisions"));
            List<DecisionRecord> replayed = of(
                    "quay-banner",
                    ReplayOracle.decisions(
                            plans, PARTITIONS, broker.readAll(one), new JsonEventReader(EventMapping.DEFAULT, 65_536)));
            assertEquals(
                    replayed.stream().map(DecisionRecord::counts).toList(),
                    live.stream().map(DecisionRecord::counts).toList());
            assertEquals(
                    replayed.stream().map(DecisionRecord::comparisons).toList(),
                    live.stream().map(DecisionRecord::comparisons).toList());
        }
    }

    @Test
    void waitsForABrokerThatIsNotThereYet() throws Exception {
        int port = freePort();
        ServiceConfig config = config("127.0.0.1:" + port, "northwater-events", "patient", freePort());
        List<Plan> plans = PlanDirectory.read(config.plans()).orElseThrow();
        try (WatchService service = start(config, plans)) {
            Awaitility.await().atMost(PATIENCE).untilAsserted(() -> {
                HttpResponse<String> ready = get(service, "health/ready");
                assertEquals(503, ready.statusCode());
                assertTrue(ready.body().contains("127.0.0.1:" + port), ready.body());
            });
            assertEquals(200, get(service, "health/live").statusCode());
            try (EmbeddedBroker broker = EmbeddedBroker.start(directory.resolve("broker"), port)) {
                try (BrokerTopics topics = new BrokerTopics(broker.bootstrapServers())) {
                    topics.create("northwater-events", PARTITIONS);
                }
                awaitReady(service);
            }
        }
    }

    private WatchService start(ServiceConfig config, List<Plan> plans) {
        return WatchService.start(config, plans, "test", NOTHING_FATAL);
    }

    private ServiceConfig config(String bootstrap, String topic, String name, int webhookPort) throws Exception {
        Path plans = Files.createDirectories(directory.resolve("plans"));
        Files.writeString(plans.resolve("quay-banner.yaml"), LiveStream.PLAN);
        Files.writeString(plans.resolve("fare-chip.yaml"), LiveStream.LONGER_PLAN);
        Files.writeString(plans.resolve("cabin-upsell.yaml"), LiveStream.BROKEN_PLAN);
        Path secret = Files.writeString(directory.resolve("webhook.secret"), SECRET);
        Path file = Files.writeString(directory.resolve("tallyward.yaml"), """
                name: %s
                kafka: {bootstrap-servers: "%s"}
                input: {topics: [%s]}
                plans: plans
                commit-interval: PT0.1S
                http: {port: 0}
                webhook: {url: "http://127.0.0.1:%d/notices", secret-file: %s, allow-http: true, allow-private: true}
                """.formatted(
                        name, bootstrap, topic, webhookPort, secret.getFileName()));
        return new ConfigReader(Map.of()).read(file).orElseThrow();
    }

    private void awaitReady(WatchService service) {
        Awaitility.await()
                .atMost(PATIENCE)
                .untilAsserted(
                        () -> assertEquals(200, get(service, "health/ready").statusCode()));
    }

    /** Both instances are asked: only the one that decides about an experiment knows it. */
    private void awaitSettled(WatchService first, WatchService second) {
        awaitComplete("quay-banner", LiveStream.START.plus(LiveStream.RUN), first, second);
        awaitComplete("cabin-upsell", LiveStream.START.plus(LiveStream.RUN), first, second);
    }

    private HttpResponse<String> get(WatchService service, String path) throws IOException, InterruptedException {
        return http.send(
                HttpRequest.newBuilder(URI.create(service.address() + path)).build(),
                HttpResponse.BodyHandlers.ofString());
    }

    private static List<DecisionRecord> decisions(BrokerUnderTest broker, String topic) {
        List<DecisionRecord> decisions = new ArrayList<>();
        for (ConsumerRecord<byte[], byte[]> record : broker.readAll(topic)) {
            decisions.add(DecisionJson.read(record.value()));
        }
        return decisions;
    }

    private static List<DecisionRecord> of(String experiment, List<DecisionRecord> records) {
        return records.stream()
                .filter(record -> record.experiment().equals(experiment))
                .toList();
    }

    private static DecisionRecord last(List<DecisionRecord> records) {
        assertTrue(records.size() > 1, () -> "several records expected, found " + records);
        return records.get(records.size() - 1);
    }

    private static int freePort() throws IOException {
        try (ServerSocket socket = new ServerSocket(0, 1, InetAddress.getLoopbackAddress())) {
            return socket.getLocalPort();
        }
    }

    /** Accepts a notice if an independent library accepts its signature. */
    private static final class Receiver implements AutoCloseable {

        private final HttpServer server;
        private final Queue<String> notices = new ConcurrentLinkedQueue<>();
        private final Queue<String> refused = new ConcurrentLinkedQueue<>();

        Receiver() throws Exception {
            server = HttpServer.create(new InetSocketAddress(InetAddress.getLoopbackAddress(), 0), 0);
            Webhook verifier = new Webhook(SECRET);
            server.createContext("/notices", exchange -> {
                String body = new String(exchange.getRequestBody().readAllBytes(), StandardCharsets.UTF_8);
                try {
                    verifier.verify(body, HttpHeaders.of(exchange.getRequestHeaders(), (name, value) -> true));
                    notices.add(body);
                    exchange.sendResponseHeaders(204, -1);
                } catch (Exception e) {
                    refused.add(e.toString());
                    exchange.sendResponseHeaders(401, -1);
                }
                exchange.close();
            });
            server.start();
        }

        int port() {
            return server.getAddress().getPort();
        }

        void awaitNotice(String type) {
            Awaitility.await()
                    .atMost(PATIENCE)
                    .until(() -> notices.stream().anyMatch(notice -> notice.contains(type)) || !refused.isEmpty());
            assertTrue(refused.isEmpty(), () -> "signatures refused: " + refused);
            assertTrue(
                    notices.stream().noneMatch(notice -> notice.contains("visitor-")),
                    () -> "a notice names a unit: " + notices);
        }

        @Override
        public void close() {
            server.stop(0);
        }
    }
}
