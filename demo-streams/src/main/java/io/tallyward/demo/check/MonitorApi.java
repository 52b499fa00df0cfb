package io.tallyward.demo.check;

import com.fasterxml.jackson.databind.JsonNode;
import com.fasterxml.jackson.databind.ObjectMapper;
import com.fasterxml.jackson.databind.node.MissingNode;
import io.tallyward.demo.child.LoopbackPorts;
import io.tallyward.demo.truth.Count;
import io.tallyward.demo.truth.ExperimentTruth.Stratum;
import java.io.IOException;
import java.net.URI;
import java.net.http.HttpClient;
import java.net.http.HttpRequest;
import java.net.http.HttpResponse;
import java.time.Duration;
import java.time.Instant;
import java.util.HashMap;
import java.util.LinkedHashMap;
import java.util.Map;
import java.util.Optional;
import java.util.stream.Collectors;

/** The monitor's public faces: its API and its metrics. */
public final class MonitorApi {

    private static final ObjectMapper JSON = new ObjectMapper();
    private static final Duration TIMEOUT = Duration.ofSeconds(5);

    private final HttpClient client =
            HttpClient.newBuilder().connectTimeout(TIMEOUT).build();
    private final URI base;

    /** The faces of a monitor that listens on a port of the loopback address. */
    public MonitorApi(int port) {
        base = URI.create("http://" + LoopbackPorts.HOST + ":" + port + "/");
    }

    /** The address of the page. */
    public URI page() {
        return base;
    }

    /** The address of the metrics. */
    public URI metrics() {
        return base.resolve("metrics");
    }

    /** Whether the monitor answers. */
    public boolean isUp() {
        return get(base.resolve("api/experiments")).isPresent();
    }

    /** Whether the monitor says that all its parts work. */
    public boolean isReady() {
        return get(base.resolve("health/ready")).isPresent();
    }

    /** The sum of all series of a metric; 0 when there are none or the monitor does not answer. */
    public double metric(String name) {
        return get(metrics()).map(text -> sum(text, name)).orElse(0.0);
    }

    /** The sum of those series of a metric that have a label, as in {@code group="count"}. */
    public double metric(String name, String label) {
        return get(metrics())
                .map(text ->
                        sum(text.lines().filter(line -> line.contains(label)).collect(Collectors.joining("\n")), name))
                .orElse(0.0);
    }

    /** The sum over a text in the exposition format of Prometheus. */
    static double sum(String exposition, String name) {
        return exposition
                .lines()
                .filter(line -> line.startsWith(name + " ") || line.startsWith(name + "{"))
                .mapToDouble(line -> Double.parseDouble(line.substring(line.lastIndexOf(' ') + 1)))
                .sum();
    }

    /** Where the experiments stand, by name; empty while the monitor does not answer, which is normal while it starts. */
    public Map<String, Standing> standings() {
        Map<String, Standing> standings = new LinkedHashMap<>();
        Optional<String> answer = get(base.resolve("api/experiments"));
        if (answer.isPresent()) {
            for (JsonNode node : tree(answer.get())) {
                standings.put(node.path("experiment").asText(), new Standing(node));
            }
        }
        return standings;
    }

    /** What this instance has counted in each input partition that it hosts; empty while it does not answer. */
    public Map<Integer, JsonNode> partitions() {
        Map<Integer, JsonNode> partitions = new LinkedHashMap<>();
        Optional<String> answer = get(base.resolve("api/partitions"));
        if (answer.isPresent()) {
            for (JsonNode partition : tree(answer.get())) {
                partitions.put(partition.path("partition").asInt(), partition);
            }
        }
        return partitions;
    }

    /** Events of an experiment outside its run since the first event, as the API tells of every partition. */
    public long outside(String experiment) {
        return partitions().values().stream()
                .mapToLong(partition -> partition
                        .path("experiments")
                        .path(experiment)
                        .path("outcomes")
                        .path("outside")
                        .asLong())
                .sum();
    }

    private JsonNode tree(String answer) {
        try {
            return JSON.readTree(answer);
        } catch (IOException e) {
            throw new IllegalStateException(base + "api: the answer is no JSON", e);
        }
    }

    private Optional<String> get(URI address) {
        HttpRequest request = HttpRequest.newBuilder(address).timeout(TIMEOUT).build();
        try {
            HttpResponse<String> response = client.send(request, HttpResponse.BodyHandlers.ofString());
            return response.statusCode() == 200 ? Optional.of(response.body()) : Optional.empty();
        } catch (IOException notYet) {
            return Optional.empty();
        } catch (InterruptedException e) {
            Thread.currentThread().interrupt();
            throw new IllegalStateException(address + ": interrupted while waiting for an answer", e);
        }
    }

    /** Where one experiment stands, as the API tells. */
    public record Standing(JsonNode node) {

        public String verdict() {
            return node.path("verdict").asText();
        }

        public String trust() {
            return node.path("trust").asText();
        }

        /** End of the last complete window; the beginning of time before the first. */
        public Instant completeUntil() {
            JsonNode until = node.path("completeUntil");
            return until.isTextual() ? Instant.parse(until.asText()) : Instant.MIN;
        }

        /** The latest look at a challenger; a missing node when there is no such challenger. */
        JsonNode comparison(String variant) {
            for (JsonNode comparison : node.path("comparisons")) {
                if (comparison.path("variant").asText().equals(variant)) {
                    return comparison;
                }
            }
            return MissingNode.getInstance();
        }

        /** Counts of the complete windows. */
        Map<Stratum, Count> counts() {
            Map<Stratum, Count> counts = new HashMap<>();
            for (JsonNode count : node.path("counts")) {
                counts.merge(
                        new Stratum(
                                count.path("epoch").asInt(),
                                count.path("variant").asText()),
                        new Count(
                                count.path("trials").asLong(),
                                count.path("successes").asLong()),
                        Count::plus);
            }
            counts.values().removeIf(Count.NONE::equals);
            return counts;
        }
    }
}
