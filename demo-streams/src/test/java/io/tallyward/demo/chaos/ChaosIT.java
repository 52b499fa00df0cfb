package io.tallyward.demo.chaos;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertTrue;

import java.nio.file.Path;
import java.time.Duration;
import org.junit.jupiter.api.Tag;
import org.junit.jupiter.api.Test;
import org.junit.jupiter.api.io.TempDir;

/** What is promised and what is not stands in the description of the package. */
@Tag("chaos")
class ChaosIT {

    private static final int FAULTS = 8;
    private static final long EVENTS = 400_000;
    private static final long SEED = 20_261_201L;
    private static final Duration AT_MOST = Duration.ofMinutes(8);

    @Test
    void countsAndDecidesThroughFaultsAsIfNothingHadHappened(@TempDir Path directory) throws Exception {
        ChaosRun.Options options = new ChaosRun.Options(FAULTS, EVENTS, SEED, true, AT_MOST, 0);
        try (ChaosRun run = new ChaosRun(options, directory, line -> {})) {
            ChaosReport report = run.carryOut();
            assertTrue(report.holds(), () -> String.join(System.lineSeparator(), report.lines()));
            assertEquals(FAULTS, report.strikes().size());
        }
    }
}
