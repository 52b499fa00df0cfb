package io.tallyward.demo.bench;

import static org.junit.jupiter.api.Assertions.assertEquals;

import com.fasterxml.jackson.databind.JsonNode;
import com.fasterxml.jackson.databind.ObjectMapper;
import io.tallyward.demo.bench.GrowthRun.Load;
import java.io.IOException;
import java.time.Duration;
import java.util.List;
import java.util.stream.LongStream;
import org.junit.jupiter.api.Test;

/** What the measurements print, for people and for machines. */
class FindingsTest {

    private static JsonNode json(Findings findings) throws IOException {
        return new ObjectMapper().readTree(findings.json());
    }

    private static LatencyResults latency() {
        long[] nanos = LongStream.rangeClosed(1, 1_000)
                .map(millis -> millis * 1_000_000)
                .toArray();
        return new LatencyResults(5_000, List.of(LatencyResults.Row.of(Duration.ofMillis(500), nanos)));
    }

    @Test
    void latencyIsShownBesideTheCommitInterval() throws IOException {
        assertEquals(
                "500 ms           1,000   500 ms  990 ms  1000 ms  1.00          1.98",
                latency().lines().get(2));
        JsonNode row = json(latency()).get("latency").get(0);
        assertEquals(500, row.get("commitIntervalMillis").asLong());
        assertEquals(990, row.get("p99Millis").asDouble());
        assertEquals(1.98, row.get("p99ToInterval").asDouble(), 1e-12);
    }

    @Test
    void growthIsARatioToTheFirstOfItsSeriesWithinARound() throws IOException {
        List<Load> partitions = List.of(new Load(1, 5), new Load(8, 5));
        List<Load> experiments = List.of(new Load(4, 1), new Load(4, 1_000));
        GrowthResults results = new GrowthResults(partitions, experiments);
        for (int slowness : new int[] {1, 4}) {
            results.add(partitions.get(0), new Measurement(1_000_000, 2 * slowness, 1));
            results.add(partitions.get(1), new Measurement(1_000_000, 3 * slowness, 1));
            results.add(experiments.get(0), new Measurement(1_000_000, slowness, 1));
            results.add(experiments.get(1), new Measurement(1_000_000, 5 * slowness, 2));
        }
        assertEquals(1.5, results.ratio(partitions.get(1), partitions.get(0)));
        assertEquals(
                "4           1,000        12.50              5.00                500,000",
                results.lines().get(5));
        JsonNode last = json(results).get("growth").get("byExperiments").get(1);
        assertEquals(1_000, last.get("experiments").asInt());
        assertEquals(5.0, last.get("ratioToFirst").asDouble());
        assertEquals(12.5, last.get("cpuSecondsPerMillion").asDouble());
    }

    @Test
    void scaleOutShowsSharesAndGain() throws IOException {
        ScaleOutResults results = new ScaleOutResults(
                2_000_000,
                List.of(
                        new ScaleOutResults.Row(List.of(12), 200_000, 2.5),
                        new ScaleOutResults.Row(List.of(4, 4, 4), 300_000, 2.75)));
        assertEquals(
                "3          4/4/4       300,000   1.50   2.75", results.lines().get(3));
        JsonNode row = json(results).get("scaleOut").get(1);
        assertEquals(3, row.get("instances").asInt());
        assertEquals("[4,4,4]", row.get("partitions").toString());
        assertEquals(1.5, row.get("ratio").asDouble());
    }

    @Test
    void restartShowsMedianAndLongest() throws IOException {
        RestartResults results = new RestartResults(List.of(
                new RestartResults.Row(RestartWay.KEPT_NAME, 1_000_000, 2_000_000_000L, 4, 3_000_000_000L, 2e6),
                new RestartResults.Row(RestartWay.KEPT_NAME, 1_000_000, 2_500_000_000L, 6, 9_000_000_000L, 1e6),
                new RestartResults.Row(RestartWay.KEPT_NAME, 1_000_000, 1_000_000_000L, 5, 2_000_000_000L, 3e6)));
        assertEquals(
                "kept name   3      2.00 s (2.50 s)  5.0    3.00 s (9.00 s)    1,000,000  2,000,000",
                results.lines().get(2));
        JsonNode row = json(results).get("restart").get(1);
        assertEquals(2.5, row.get("readySeconds").asDouble());
        assertEquals(6.0, row.get("cpuSeconds").asDouble());
        assertEquals(9.0, row.get("countingAgainSeconds").asDouble());
        assertEquals(1e6, row.get("unitsRestoredPerSecond").asDouble());
    }

    @Test
    void tellsMemoryOverALineOfOutput() throws Exception {
        MemoryResults results = new MemoryResults(new MemoryResults.Row(39.25, 1.25), new MemoryResults.Row(23.5, 1.5));
        assertEquals(results, MemoryResults.in("starting\n" + results.line() + "\n"));
        assertEquals(
                "open    39.3            40    1.3                 1",
                results.lines().get(2));
        JsonNode memory = json(results).get("memory");
        assertEquals(39.25, memory.get("open").get("megabytesPerMillion").asDouble());
        assertEquals(1.5, memory.get("sealed").get("millionsRestoredPerSecond").asDouble());
    }
}
