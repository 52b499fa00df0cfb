package io.tallyward.service.command;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.connector.format.PlanEntryJson;
import io.tallyward.engine.plan.PlanEntry;
import io.tallyward.service.plan.PlanReader;
import java.io.IOException;
import java.nio.file.Files;
import java.nio.file.Path;
import java.time.Instant;
import java.util.List;
import java.util.Map;
import org.junit.jupiter.api.BeforeEach;
import org.junit.jupiter.api.Test;
import org.junit.jupiter.api.io.TempDir;

class CheckCommandTest {

    private static final ServiceStarter NO_SERVICE = (config, plans) -> {
        throw new AssertionError("the service was started");
    };

    private static final String CONFIG = """
            kafka: {bootstrap-servers: "127.0.0.1:9092"}
            input: {topics: [views, clicks]}
            """;

    static final String PLAN = """
            experiment: quay-banner
            question: does the wide quay photo bring more timetable clicks?
            owner: web-growth@northwater.example
            variants: {plain: {share: 0.5, control: true}, wide: {share: 0.5}}
            test: {alpha: 0.05, baseline: 0.12, smallest-effect: 0.006}
            looks: {every: PT6H}
            run: {from: 2026-05-04T00:00:00Z, at-most: P28D}
            """;

    @TempDir
    Path directory;

    private Path config;

    @BeforeEach
    void write() throws IOException {
        config = Files.writeString(directory.resolve("tallyward.yaml"), CONFIG);
        Files.createDirectory(directory.resolve("plans"));
        Files.writeString(directory.resolve("plans/quay.yaml"), PLAN);
    }

    @Test
    void isContent() {
        assertEquals(
                new CommandRun(
                        0,
                        List.of(
                                "configuration  fine: " + config,
                                "plans          fine: quay-banner",
                                "broker         fine: 127.0.0.1:9092, views, clicks with 4 partitions",
                                "book of plans  new: quay-banner"),
                        List.of()),
                check((properties, topics) -> Map.of("views", 4, "clicks", 4)));
        assertEquals(
                List.of(
                        "{\"type\":\"check\",\"config\":\"" + config + "\",\"experiments\":[\"quay-banner\"],"
                                + "\"brokerChecked\":true,\"topics\":{\"clicks\":4,\"views\":4},\"book\":{\"quay-banner\":\"new\"},\"problems\":0}"),
                check((properties, topics) -> Map.of("views", 4, "clicks", 4), "--json")
                        .out());
    }

    @Test
    void saysWhatTheBookOfPlansWouldMakeOfThePlans() throws IOException {
        Files.writeString(
                directory.resolve("plans/chip.yaml"),
                PLAN.replace("quay-banner", "fare-chip").replace("alpha: 0.05", "alpha: 0.01"));
        List<PlanEntry> entries = List.of(
                proposal(PLAN),
                proposal(PLAN.replace("quay-banner", "fare-chip")),
                new PlanEntry.Freeze("quay-banner"),
                new PlanEntry.Freeze("fare-chip"));

        CommandRun run = CommandRun.of(
                (properties, topics) -> topics.contains("tallyward-plans")
                        ? Map.of("tallyward-plans", 1)
                        : Map.of("views", 4, "clicks", 4),
                (properties, topic, values) -> {
                    assertEquals("tallyward-plans", topic);
                    entries.forEach(entry -> values.accept(PlanEntryJson.write(entry)));
                },
                (properties, topics, from, to, records) -> {
                    throw new AssertionError("the input was read");
                },
                "check",
                "--config",
                config.toString());

        assertEquals(2, run.status());
        assertEquals(
                "book of plans  frozen: quay-banner; refused: fare-chip",
                run.out().get(3));
        assertTrue(
                run.err().get(0).contains("the plan of fare-chip would be refused")
                        && run.err().get(0).contains("test.alpha is 0.05, not 0.01"),
                run.err().toString());
    }

    private static PlanEntry proposal(String plan) {
        return new PlanEntry.Proposal(
                PlanReader.parse("plan.yaml", plan).value().orElseThrow(), Instant.EPOCH, "another instance");
    }

    @Test
    void counts() {
        assertEquals(
                "broker         fine: 127.0.0.1:9092, views, clicks with 1 partition",
                check((properties, topics) -> Map.of("views", 1, "clicks", 1))
                        .out()
                        .get(2));
    }

    @Test
    void leavesTheBrokerAlone() {
        CommandRun run = CommandRun.of("check", "--no-broker", "--config", config.toString());
        assertEquals(0, run.status());
        assertEquals("broker         not asked", run.out().get(2));
    }

    @Test
    void reportsPlansAndTopicsTogether() throws IOException {
        Path plan = Files.writeString(directory.resolve("plans/quay.yaml"), PLAN.replace("0.05", "2"));
        assertEquals(
                new CommandRun(
                        2,
                        List.of(),
                        List.of(
                                plan + ":5: test.alpha: 2 (expected: number from 1e-9 to below 0.5)",
                                "input topic clicks does not exist on 127.0.0.1:9092: create it, or correct "
                                        + "input.topics in " + config)),
                check((properties, topics) -> Map.of("views", 4)));
    }

    @Test
    void wantsAsManyPartitionsInEveryTopic() {
        assertEquals(
                new CommandRun(
                        3,
                        List.of(
                                "configuration  fine: " + config,
                                "plans          fine: quay-banner",
                                "broker         not as it has to be"),
                        List.of("input topics have different numbers of partitions {clicks=2, views=4} (expected: the "
                                + "same number, so that the events of a unit meet): give them as many partitions, or "
                                + "leave all but one out of input.topics in " + config)),
                check((properties, topics) -> Map.of("views", 4, "clicks", 2)));
    }

    @Test
    void saysWhatIsFineWhileTheBrokerIsDown() {
        TopicLookup down = (properties, topics) -> {
            throw new IllegalStateException("the broker at 127.0.0.1:9092 does not answer (Timed out waiting for a node"
                    + " assignment. Call: listNodes): start it");
        };
        CommandRun run = check(down);
        assertEquals(3, run.status());
        assertEquals("configuration  fine: " + config, run.out().get(0));
        assertEquals("plans          fine: quay-banner", run.out().get(1));
        assertEquals(List.of("the broker at 127.0.0.1:9092 does not answer: start it"), run.err());
    }

    @Test
    void passesClientPropertiesOn() throws IOException {
        Files.writeString(
                config, CONFIG.replace("\"}", "\", properties: {client.rack: quay, request.timeout.ms: 700}}"));
        CommandRun run = check((properties, topics) -> {
            assertEquals(
                    Map.of(
                            "bootstrap.servers",
                            "127.0.0.1:9092",
                            "client.rack",
                            "quay",
                            "request.timeout.ms",
                            "700",
                            "default.api.timeout.ms",
                            "5000"),
                    properties);
            return Map.of("views", 1, "clicks", 1);
        });
        assertEquals(0, run.status(), () -> run.err().toString());
    }

    @Test
    void saysThatTheFileCannotBeRead() {
        Path missing = directory.resolve("missing.yaml");
        assertEquals(
                new CommandRun(
                        2,
                        List.of(),
                        List.of(missing + ": cannot be read: there is no such file (expected: a YAML file)")),
                CommandRun.of("check", "--config", missing.toString()));
    }

    private CommandRun check(TopicLookup lookup, String... more) {
        String[] arguments = new String[3 + more.length];
        arguments[0] = "check";
        arguments[1] = "--config";
        arguments[2] = config.toString();
        System.arraycopy(more, 0, arguments, 3, more.length);
        return CommandRun.of(NO_SERVICE, lookup, () -> {}, arguments);
    }
}
