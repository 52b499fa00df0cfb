package io.tallyward.demo.check;

import com.fasterxml.jackson.databind.JsonNode;
import com.fasterxml.jackson.databind.ObjectMapper;
import io.tallyward.demo.truth.Cell;
import io.tallyward.demo.truth.Count;
import java.io.IOException;
import java.io.UncheckedIOException;
import java.nio.charset.StandardCharsets;
import java.util.HashMap;
import java.util.Map;
import org.apache.kafka.clients.consumer.ConsumerRecord;
import org.apache.kafka.common.header.Header;

/** What the monitor has counted and rejected, summed up from its topics. Not thread-safe. */
public final class MonitorCounts {

    private static final ObjectMapper JSON = new ObjectMapper();
    private static final String REASON_HEADER = "tallyward-reason";

    private final Map<String, Map<Cell, Count>> cells = new HashMap<>();
    private final Map<String, Map<String, Long>> outcomes = new HashMap<>();
    private final Map<String, Long> rejects = new HashMap<>();

    /** Reads the topics of a monitor whose name is the prefix. */
    public static MonitorCounts read(String bootstrapServers, String prefix) {
        MonitorCounts counts = new MonitorCounts();
        CommittedTopic.read(bootstrapServers, prefix + "-tallies", tally -> counts.add(tally.value()));
        CommittedTopic.read(bootstrapServers, prefix + "-rejects", counts::addReject);
        return counts;
    }

    /** Counts of an experiment by place; empty when nothing was counted. */
    public Map<Cell, Count> cells(String experiment) {
        return cells.getOrDefault(experiment, Map.of());
    }

    /** Events of sealed windows of an experiment by outcome. */
    public Map<String, Long> outcomes(String experiment) {
        return outcomes.getOrDefault(experiment, Map.of());
    }

    /** Rejected records by reason. */
    public Map<String, Long> rejects() {
        return Map.copyOf(rejects);
    }

    void add(byte[] tally) {
        JsonNode update = parse(tally);
        String experiment = update.path("experiment").asText();
        int partition = update.path("partition").asInt();
        for (JsonNode window : update.path("windows")) {
            long start = window.path("startMillis").asLong();
            for (JsonNode node : window.path("cells")) {
                Cell cell = new Cell(
                        partition,
                        start,
                        node.path("epoch").asInt(),
                        node.path("variant").asInt());
                cells.computeIfAbsent(experiment, name -> new HashMap<>()).merge(cell, count(node), Count::plus);
            }
            Map<String, Long> byOutcome = outcomes.computeIfAbsent(experiment, name -> new HashMap<>());
            window.path("outcomes")
                    .properties()
                    .forEach(outcome ->
                            byOutcome.merge(outcome.getKey(), outcome.getValue().asLong(), Long::sum));
        }
    }

    private static Count count(JsonNode cell) {
        long trials = cell.path("trials").asLong();
        long successes = cell.path("successes").asLong();
        JsonNode clusters = cell.path("clusters");
        if (!clusters.isObject()) {
            return new Count(trials, successes);
        }
        return new Count(
                trials,
                successes,
                clusters.path("units").asLong(),
                clusters.path("trialSquares").asLong(),
                clusters.path("products").asLong(),
                clusters.path("successSquares").asLong());
    }

    private void addReject(ConsumerRecord<byte[], byte[]> reject) {
        Header reason = reject.headers().lastHeader(REASON_HEADER);
        String code = reason == null ? "without a reason" : new String(reason.value(), StandardCharsets.UTF_8);
        rejects.merge(code, 1L, Long::sum);
    }

    private static JsonNode parse(byte[] json) {
        try {
            return JSON.readTree(json);
        } catch (IOException e) {
            throw new UncheckedIOException("a tally is no JSON", e);
        }
    }
}
