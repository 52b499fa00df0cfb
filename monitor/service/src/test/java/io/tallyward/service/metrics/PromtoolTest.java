package io.tallyward.service.metrics;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.engine.count.OutcomeCounts;
import io.tallyward.service.status.CountReport;
import io.tallyward.service.status.CountReport.ExperimentCount;
import io.tallyward.service.status.Northwater;
import io.tallyward.service.status.StatusBoard;
import java.io.IOException;
import java.nio.charset.StandardCharsets;
import java.nio.file.Files;
import java.nio.file.Path;
import java.util.Map;
import java.util.OptionalLong;
import java.util.concurrent.TimeUnit;
import org.junit.jupiter.api.Assumptions;
import org.junit.jupiter.api.Test;
import org.junit.jupiter.api.io.TempDir;

/** Oracle: {@code promtool check metrics} of Prometheus, which parses the text and applies the naming rules. */
class PromtoolTest {

    @Test
    void findsNothingToComplainAbout(@TempDir Path directory) throws IOException, InterruptedException {
        Assumptions.assumeTrue(onPath("promtool"), "promtool is not on the PATH; install Prometheus to run this check");
        StatusBoard board = new StatusBoard();
        board.publishExperiments(0, Northwater.all());
        board.publishCounts(
                0,
                new CountReport(
                        Map.of("quay-banner", new ExperimentCount(OutcomeCounts.NONE, 4)),
                        OptionalLong.of(Northwater.START.toEpochMilli()),
                        Map.of(),
                        9,
                        true));
        Path text = directory.resolve("metrics.txt");
        Path verdict = directory.resolve("verdict.txt");
        try (PrometheusExposition exposition = MonitorMetricsTest.exposition(board)) {
            ProcessMeters meters = ProcessMeters.bind(exposition.meters());
            Files.writeString(text, exposition.text(), StandardCharsets.UTF_8);
            meters.close();
        }
        Process promtool = new ProcessBuilder("promtool", "check", "metrics")
                .redirectInput(text.toFile())
                .redirectErrorStream(true)
                .redirectOutput(verdict.toFile())
                .start();
        assertTrue(promtool.waitFor(30, TimeUnit.SECONDS), "promtool did not end within 30 s");
        assertEquals("", Files.readString(verdict), "what promtool says");
        assertEquals(0, promtool.exitValue());
    }

    private static boolean onPath(String program) {
        for (String directory : System.getenv().getOrDefault("PATH", "").split(java.io.File.pathSeparator)) {
            if (Files.isExecutable(Path.of(directory, program))) {
                return true;
            }
        }
        return false;
    }
}
