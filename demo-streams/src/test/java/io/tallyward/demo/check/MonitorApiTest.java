package io.tallyward.demo.check;

import static org.junit.jupiter.api.Assertions.assertEquals;

import org.junit.jupiter.api.Test;

class MonitorApiTest {

    private static final String EXPOSITION = """
            # HELP tallyward_events_total Events of an experiment whose outcome is final.
            # TYPE tallyward_events_total counter
            tallyward_events_total{experiment="deck-map",outcome="trial",} 12.0
            tallyward_events_total{experiment="quay-banner",outcome="trial"} 1.5E6
            tallyward_events_total_more 5.0
            tallyward_webhook_parked 3.0
            """;

    @Test
    void addsUpTheSeriesOfAMetric() {
        assertEquals(1_500_012, MonitorApi.sum(EXPOSITION, "tallyward_events_total"));
        assertEquals(3, MonitorApi.sum(EXPOSITION, "tallyward_webhook_parked"));
        assertEquals(0, MonitorApi.sum(EXPOSITION, "tallyward_events"));
    }
}
