package io.tallyward.demo.chaos;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertFalse;
import static org.junit.jupiter.api.Assertions.assertTrue;

import com.fasterxml.jackson.databind.JsonNode;
import com.fasterxml.jackson.databind.ObjectMapper;
import io.tallyward.demo.chaos.Recoveries.Strike;
import io.tallyward.demo.check.Finding;
import java.time.Duration;
import java.util.List;
import org.junit.jupiter.api.Test;

class ChaosReportTest {

    private final Strike strike = new Strike(Fault.BROKER_KILL, "broker", true, Duration.ofMillis(12_345), 1_234_567);

    private ChaosReport report(boolean holds) {
        Finding finding = Finding.of("quay-banner: totals", holds, "the truth is 2, the monitor says 3");
        return new ChaosReport(7, 2_000_000, Duration.ofSeconds(61), List.of(strike), List.of(finding));
    }

    @Test
    void endsWithWhetherAllIsEqual() {
        List<String> lines = report(true).lines();
        assertEquals("1 faults, 2,000,000 events, 61 s, seed 7: all 1 checks hold", lines.get(lines.size() - 1));
        assertTrue(report(true).holds());
    }

    @Test
    void saysWhatDiffers() {
        List<String> lines = report(false).lines();
        assertTrue(lines.contains("differs: quay-banner: totals"), lines.toString());
        assertTrue(lines.contains("    the truth is 2, the monitor says 3"), lines.toString());
        assertEquals(
                "1 faults, 2,000,000 events, 61 s, seed 7: 1 of 1 checks do not hold", lines.get(lines.size() - 1));
        assertFalse(report(false).holds());
    }

    @Test
    void tellsMachinesTheSame() throws Exception {
        JsonNode json = new ObjectMapper().readTree(report(false).json());
        assertFalse(json.path("holds").asBoolean());
        JsonNode fault = json.path("faults").path(0);
        assertEquals("broker-kill", fault.path("fault").asText());
        assertEquals(12.345, fault.path("seconds").asDouble());
        assertEquals(1_234_567, fault.path("eventsSent").asLong());
        assertTrue(fault.path("recoverySeconds").isNull(), "a fault without recovery");
        assertEquals(
                "the truth is 2, the monitor says 3",
                json.path("checks").path(0).path("differences").path(0).asText());
    }
}
