package io.tallyward.service.command;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.connector.format.PlanEntryJson;
import io.tallyward.connector.kafka.KeyPartitions;
import io.tallyward.connector.kafka.LogBound;
import io.tallyward.engine.plan.PlanEntry;
import io.tallyward.service.config.document.BadInputException;
import io.tallyward.service.plan.PlanReader;
import java.io.IOException;
import java.nio.charset.StandardCharsets;
import java.nio.file.Files;
import java.nio.file.Path;
import java.time.Instant;
import java.util.ArrayList;
import java.util.List;
import java.util.Map;
import java.util.Optional;
import org.apache.kafka.clients.consumer.ConsumerRecord;
import org.apache.kafka.common.TopicPartition;
import org.apache.kafka.common.header.internals.RecordHeaders;
import org.apache.kafka.common.record.TimestampType;
import org.junit.jupiter.api.BeforeEach;
import org.junit.jupiter.api.Test;
import org.junit.jupiter.api.io.TempDir;

/** A replay over topics is that over a file with the same events, but for what only one of them has. */
class InputTopicsTest {

    private static final int PARTITIONS = 2;

    @TempDir
    Path directory;

    private final List<ConsumerRecord<byte[], byte[]>> records = new ArrayList<>();
    private final List<Object> asked = new ArrayList<>();
    private Path config;

    @BeforeEach
    void writeInput() throws IOException {
        DecisionLogs.quayBanner(directory);
        config = Files.writeString(directory.resolve("tallyward.yaml"), """
                kafka: {bootstrap-servers: "localhost:9092"}
                input: {topics: [events]}
                plans: plans
                """);
        for (String line : Files.readAllLines(directory.resolve("events.jsonl"))) {
            String unit = line.replaceAll(".*\"unit\":\"([^\"]*)\".*", "$1");
            add(KeyPartitions.partitionOf(unit.getBytes(StandardCharsets.UTF_8), PARTITIONS), line);
        }
    }

    private void add(int partition, String line) {
        Instant received = line.contains("\"at\"")
                ? Instant.parse(line.replaceAll(".*\"at\":\"([^\"]*)\".*", "$1"))
                : Instant.EPOCH;
        records.add(record(partition, received, line.getBytes(StandardCharsets.UTF_8)));
    }

    private ConsumerRecord<byte[], byte[]> record(int partition, Instant received, byte[] value) {
        return new ConsumerRecord<>(
                "events",
                partition,
                records.size(),
                received.toEpochMilli(),
                TimestampType.CREATE_TIME,
                0,
                0,
                null,
                value,
                new RecordHeaders(),
                Optional.empty());
    }

    private CommandRun replay(String... more) throws IOException, BadInputException {
        String plan = Files.readString(directory.resolve("plans").resolve("quay-banner.yaml"));
        PlanEntry proposal =
                new PlanEntry.Proposal(PlanReader.parse("plan", plan).orElseThrow(), Instant.EPOCH, "another instance");
        List<String> arguments = new ArrayList<>(List.of("replay", "--config", config.toString()));
        arguments.addAll(List.of(more));
        return CommandRun.of(
                (properties, topics) -> Map.of("events", PARTITIONS),
                (properties, topic, values) -> {
                    asked.add(topic);
                    values.accept(PlanEntryJson.write(proposal));
                },
                (properties, topics, from, to, taken) -> {
                    asked.addAll(List.of(from, to));
                    records.forEach(taken);
                },
                arguments.toArray(String[]::new));
    }

    private CommandRun ofFile(String... more) {
        List<String> arguments = new ArrayList<>(List.of(
                "replay",
                "--plans",
                directory.resolve("plans").toString(),
                "--events",
                directory.resolve("events.jsonl").toString(),
                "--partitions",
                String.valueOf(PARTITIONS)));
        arguments.addAll(List.of(more));
        return CommandRun.of(arguments.toArray(String[]::new));
    }

    @Test
    void decidesAsOverAFileOfTheSameEvents() throws Exception {
        List<String> file = ofFile("--json").ofType("decision");
        assertEquals(file, replay("--json", "--seal-open").ofType("decision"));
        List<String> open = replay("--json").ofType("decision");
        assertTrue(open.size() > 1 && open.size() <= file.size(), open.size() + " of " + file.size());
        assertEquals(file.subList(0, open.size()), open);
    }

    @Test
    void saysWhatHasNotBeenCountedYet() throws Exception {
        String open = "Windows still open at the end of the input are not counted yet; --seal-open counts them.";
        assertTrue(replay().out().contains(open));
        assertTrue(replay("--seal-open").out().contains("Windows still open at the end of the input are counted too."));
    }

    @Test
    void takesThePlansFromTheBookAndReadsBetweenItsBounds() throws Exception {
        replay();
        assertEquals(List.of("tallyward-plans", new LogBound.Edge(), new LogBound.Edge()), asked);
        asked.clear();
        replay("--from", "events-0@12,events-1@9", "--to", "2026-05-05T00:00:00Z");
        assertEquals(
                List.of(
                        "tallyward-plans",
                        new LogBound.Offsets(
                                Map.of(new TopicPartition("events", 0), 12L, new TopicPartition("events", 1), 9L)),
                        new LogBound.At(Instant.parse("2026-05-05T00:00:00Z"))),
                asked);
        asked.clear();
        replay("--plans", directory.resolve("plans").toString());
        assertEquals(List.of(new LogBound.Edge(), new LogBound.Edge()), asked);
    }

    @Test
    void beginsWhereTheServiceWasToldTo() throws Exception {
        Files.writeString(
                config, Files.readString(config).replace("[events]", "[events], start: \"2026-05-04T06:00:00Z\""));
        replay();
        assertEquals(new LogBound.At(Instant.parse("2026-05-04T06:00:00Z")), asked.get(1));
    }

    @Test
    void namesRejectedRecordsByPartitionAndOffset() throws Exception {
        records.clear();
        records.add(record(1, Instant.EPOCH, null));
        records.add(record(0, Instant.EPOCH, "no".getBytes(StandardCharsets.UTF_8)));
        add(
                0,
                "{\"kind\":\"view\",\"experiment\":\"quay-banner\",\"variant\":\"tall\",\"unit\":\"u\",\"id\":\"e\","
                        + "\"at\":\"2026-05-04T00:00:00Z\"}");
        List<String> told = replay().err();
        assertEquals(3, told.size(), told::toString);
        assertTrue(told.get(0).startsWith("events-1@0: unparsable: "), told.get(0));
        assertTrue(told.get(1).startsWith("events-0@1: unparsable: "), told.get(1));
        assertTrue(told.get(2).startsWith("events-0@2: unknown-variant: "), told.get(2));
    }

    @Test
    void refusesOptionsThatDoNotGoTogether() throws Exception {
        assertRefused("where the events are", CommandRun.of("replay"));
        assertRefused("where the events are", ofFile("--config", config.toString()));
        assertRefused("what goes with --events", ofFile("--seal-open"));
        assertRefused("what goes with --events", ofFile("--to", "events-0@1"));
        assertRefused("what goes with --config", replay("--partitions", "2"));
        for (String bound : List.of("yesterday", "events@1", "events-0@1,", "events-0@1,events-0@2", "events-0@-1")) {
            CommandRun run = replay("--from", bound);
            assertEquals(2, run.status(), bound);
            assertTrue(
                    run.err().get(0).contains(bound + " (expected: " + LogBounds.EXPECTED + ")"),
                    run.err().get(0));
        }
    }

    private static void assertRefused(String found, CommandRun run) {
        assertEquals(2, run.status());
        assertTrue(
                run.err().get(0).startsWith(found + " (expected: "), run.err().get(0));
    }
}
