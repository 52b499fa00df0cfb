package io.tallyward.demo.check;

import static java.nio.charset.StandardCharsets.UTF_8;

import com.fasterxml.jackson.databind.JsonNode;
import com.fasterxml.jackson.databind.ObjectMapper;
import java.io.IOException;
import java.io.UncheckedIOException;
import java.nio.file.Files;
import java.nio.file.Path;
import java.time.Instant;
import java.util.ArrayList;
import java.util.HashMap;
import java.util.List;
import java.util.Map;
import java.util.stream.Stream;

/** Decision records by experiment, in the order they were taken: as the monitor wrote them or as a replay prints them. */
public final class DecisionLog {

    private static final ObjectMapper JSON = new ObjectMapper();
    private static final String RECORD_START = "{\"type\":\"decision\"";

    private final Map<String, List<JsonNode>> records = new HashMap<>();

    private DecisionLog() {}

    /** Reads the decisions of a monitor whose name is the prefix. */
    public static DecisionLog ofMonitor(String bootstrapServers, String prefix) {
        DecisionLog log = new DecisionLog();
        CommittedTopic.read(bootstrapServers, prefix + "-decisions", record -> log.add(parse(record.value())));
        return log;
    }

    /** Reads what {@code tallyward replay --json} printed. */
    public static DecisionLog ofReplay(Path printed) throws IOException {
        DecisionLog log = new DecisionLog();
        try (Stream<String> lines = Files.lines(printed)) {
            lines.filter(line -> line.startsWith(RECORD_START)).forEach(line -> log.add(parse(line.getBytes(UTF_8))));
        }
        return log;
    }

    private void add(JsonNode decision) {
        records.computeIfAbsent(decision.path("experiment").asText(), name -> new ArrayList<>())
                .add(decision);
    }

    /** How many records there are. */
    public int size() {
        return records.values().stream().mapToInt(List::size).sum();
    }

    /**
     * Compares with an undisturbed replay of the same stream. The replay may have gone further: it knows the end of its
     * file, while the monitor goes on waiting.
     *
     * @param completeUntil how far the monitor has come, by experiment
     */
    public Finding sameAs(DecisionLog replayed, Map<String, Instant> completeUntil) {
        List<String> differences = new ArrayList<>();
        completeUntil.forEach((experiment, until) -> {
            List<JsonNode> live = records.getOrDefault(experiment, List.of());
            List<JsonNode> right = replayed.records.getOrDefault(experiment, List.of()).stream()
                    .filter(record ->
                            !Instant.parse(record.path("windowEnd").asText()).isAfter(until))
                    .toList();
            for (int i = 0; i < Math.max(live.size(), right.size()); i++) {
                JsonNode found = i < live.size() ? live.get(i) : JSON.nullNode();
                JsonNode expected = i < right.size() ? right.get(i) : JSON.nullNode();
                if (!found.equals(expected)) {
                    differences.add(
                            experiment + ": record " + (i + 1) + " is " + found + ", the replay says " + expected);
                    break;
                }
            }
        });
        return new Finding("decision records against a replay", differences);
    }

    private static JsonNode parse(byte[] json) {
        try {
            return JSON.readTree(json);
        } catch (IOException e) {
            throw new UncheckedIOException("a decision record is no JSON", e);
        }
    }
}
