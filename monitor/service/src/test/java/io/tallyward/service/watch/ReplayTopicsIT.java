package io.tallyward.service.watch;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertTrue;

import com.fasterxml.jackson.databind.JsonNode;
import com.fasterxml.jackson.databind.json.JsonMapper;
import io.tallyward.connector.kafka.CommittedTopic;
import io.tallyward.connector.kafka.InputLog;
import io.tallyward.connector.kafka.InternalTopics;
import io.tallyward.service.command.CommandLineFactory;
import io.tallyward.service.config.ConfigReader;
import io.tallyward.service.config.ServiceConfig;
import io.tallyward.service.plan.PlanDirectory;
import io.tallyward.testkit.BrokerUnderTest;
import java.io.IOException;
import java.io.PrintWriter;
import java.io.StringWriter;
import java.net.URI;
import java.net.http.HttpClient;
import java.net.http.HttpRequest;
import java.net.http.HttpResponse;
import java.nio.charset.StandardCharsets;
import java.nio.file.Files;
import java.nio.file.Path;
import java.time.Duration;
import java.time.Instant;
import java.util.ArrayList;
import java.util.HashMap;
import java.util.List;
import java.util.Map;
import java.util.TreeMap;
import java.util.TreeSet;
import java.util.regex.Pattern;
import org.apache.kafka.clients.admin.Admin;
import org.apache.kafka.clients.admin.OffsetSpec;
import org.apache.kafka.clients.consumer.ConsumerRecord;
import org.apache.kafka.clients.producer.ProducerRecord;
import org.apache.kafka.common.TopicPartition;
import org.awaitility.Awaitility;
import org.junit.jupiter.api.BeforeEach;
import org.junit.jupiter.api.Test;
import org.junit.jupiter.api.io.TempDir;

/** A replay of the topics of a service that ran decides byte for byte what the service wrote, and leaves no trace. */
class ReplayTopicsIT {

    private static final int PARTITIONS = 3;
    private static final Duration PATIENCE = Duration.ofSeconds(60);
    private static final JsonMapper JSON = new JsonMapper();

    @TempDir
    private Path directory;

    private Path plans;

    @BeforeEach
    void writePlans() throws IOException {
        plans = Files.createDirectory(directory.resolve("plans"));
        Files.writeString(plans.resolve("quay-banner.yaml"), LiveStream.PLAN);
        Files.writeString(plans.resolve("fare-chip.yaml"), LiveStream.LONGER_PLAN);
        Files.writeString(plans.resolve("cabin-upsell.yaml"), LiveStream.BROKEN_PLAN);
    }

    @Test
    void decidesWhatWasDecidedLive() throws Exception {
        try (BrokerUnderTest broker = BrokerUnderTest.start()) {
            String topic = broker.newTopic("northwater-events", PARTITIONS);
            List<ProducerRecord<byte[], byte[]>> stream = LiveStream.of(topic, PARTITIONS, 20261204L);
            Path file = config(broker, topic);
            ServiceConfig config = new ConfigReader(Map.of()).read(file).orElseThrow();
            watch(broker, config, stream);
            Map<String, List<String>> live = live(broker, config.name() + "-decisions");
            assertEquals(3, live.size());

            Traces before = Traces.of(broker);
            Map<String, List<String>> replayed = decisions(run(0, "--config", file.toString()));
            assertEquals(live, replayed);
            assertEquals(before, Traces.of(broker), "a replay leaves no trace");

            String own = plans.toString();
            assertEquals(live, decisions(run(0, "--config", file.toString(), "--plans", own)));
            sealsWhatIsOpenWhenAsked(file, live);
            goesAsFarAsItIsTold(file, topic, live);
        }
    }

    /** More is decided than was live, and what was is the beginning of it. */
    private static void sealsWhatIsOpenWhenAsked(Path file, Map<String, List<String>> live) throws IOException {
        Map<String, List<String>> sealed = decisions(run(0, "--config", file.toString(), "--seal-open"));
        live.forEach((experiment, records) ->
                assertEquals(records, sealed.get(experiment).subList(0, records.size()), experiment));
    }

    /** The first four hours or so: fewer decisions, each of which is one that was taken live. */
    private static void goesAsFarAsItIsTold(Path file, String topic, Map<String, List<String>> live)
            throws IOException {
        List<String> ends = new ArrayList<>();
        for (int partition = 0; partition < PARTITIONS; partition++) {
            ends.add(topic + "-" + partition + "@1100");
        }
        Map<String, List<String>> part = decisions(run(0, "--config", file.toString(), "--to", String.join(",", ends)));
        List<String> begun = part.get("quay-banner");
        assertTrue(begun.size() > 1 && begun.size() < live.get("quay-banner").size(), begun::toString);
        assertEquals(live.get("quay-banner").subList(0, begun.size()), begun);
        assertEquals(Map.of(), decisions(run(0, "--config", file.toString(), "--from", "2400-01-01T00:00:00Z")));
        run(3, "--config", file.toString(), "--from", topic + "-0@99999999");
    }

    private void watch(BrokerUnderTest broker, ServiceConfig config, List<ProducerRecord<byte[], byte[]>> stream)
            throws Exception {
        broker.produce(stream.subList(0, stream.size() / 2));
        try (WatchService service =
                WatchService.start(config, PlanDirectory.read(config.plans()).orElseThrow(), "test", (group, cause) -> {
                    throw new AssertionError(group + " failed", cause);
                })) {
            broker.produce(stream.subList(stream.size() / 2, stream.size()));
            for (String experiment : List.of("quay-banner", "cabin-upsell")) {
                awaitComplete(service, experiment, LiveStream.START.plus(LiveStream.RUN));
            }
        }
    }

    private static void awaitComplete(WatchService service, String experiment, Instant moment) {
        HttpClient http = HttpClient.newHttpClient();
        HttpRequest question = HttpRequest.newBuilder(URI.create(service.address() + "api/experiments"))
                .build();
        Pattern complete =
                Pattern.compile("\"experiment\":\"" + experiment + "\"[^{}]*\"completeUntil\":\"" + moment + "\"");
        Awaitility.await().atMost(PATIENCE).untilAsserted(() -> {
            String known =
                    http.send(question, HttpResponse.BodyHandlers.ofString()).body();
            assertTrue(complete.matcher(known).find(), known);
        });
    }

    private Path config(BrokerUnderTest broker, String topic) throws IOException {
        return Files.writeString(directory.resolve("tallyward.yaml"), """
                name: %s
                kafka: {bootstrap-servers: "%s"}
                input: {topics: [%s]}
                plans: plans
                commit-interval: PT0.1S
                http: {port: 0}
                """.formatted(
                        broker.uniqueName("replayed"), broker.bootstrapServers(), topic));
    }

    private static Map<String, List<String>> live(BrokerUnderTest broker, String topic) throws IOException {
        Map<String, List<String>> records = new TreeMap<>();
        for (ConsumerRecord<byte[], byte[]> record : broker.readAll(topic)) {
            add(records, new String(record.value(), StandardCharsets.UTF_8));
        }
        return records;
    }

    private static Map<String, List<String>> decisions(String output) throws IOException {
        Map<String, List<String>> records = new TreeMap<>();
        for (String line : output.lines().toList()) {
            if (JSON.readTree(line).get("type").asText().equals("decision")) {
                add(records, line);
            }
        }
        return records;
    }

    private static void add(Map<String, List<String>> records, String line) throws IOException {
        JsonNode tree = JSON.readTree(line);
        records.computeIfAbsent(tree.get("experiment").asText(), name -> new ArrayList<>())
                .add(line);
    }

    private static String run(int status, String... arguments) {
        StringWriter out = new StringWriter();
        StringWriter err = new StringWriter();
        List<String> all = new ArrayList<>(List.of("replay", "--json"));
        all.addAll(List.of(arguments));
        int found = CommandLineFactory.of(
                        Map.of(),
                        (config, plans) -> {
                            throw new AssertionError("the service was started");
                        },
                        InternalTopics::partitions,
                        CommittedTopic::read,
                        InputLog::read,
                        () -> {})
                .setOut(new PrintWriter(out))
                .setErr(new PrintWriter(err))
                .execute(all.toArray(String[]::new));
        assertEquals(status, found, () -> err + out.toString());
        return out.toString();
    }

    /** What a broker would show of someone who wrote, committed or joined. */
    private record Traces(Map<String, Long> ends, TreeSet<String> groups) {

        static Traces of(BrokerUnderTest broker) throws Exception {
            try (Admin admin = Admin.create(Map.of("bootstrap.servers", broker.bootstrapServers()))) {
                Map<TopicPartition, OffsetSpec> asked = new HashMap<>();
                admin.describeTopics(admin.listTopics().names().get())
                        .allTopicNames()
                        .get()
                        .forEach((name, topic) -> topic.partitions()
                                .forEach(info ->
                                        asked.put(new TopicPartition(name, info.partition()), OffsetSpec.latest())));
                Map<String, Long> ends = new TreeMap<>();
                admin.listOffsets(asked)
                        .all()
                        .get()
                        .forEach((partition, end) -> ends.put(partition.toString(), end.offset()));
                TreeSet<String> groups = new TreeSet<>();
                admin.listGroups().all().get().forEach(group -> groups.add(group.groupId()));
                return new Traces(ends, groups);
            }
        }
    }
}
