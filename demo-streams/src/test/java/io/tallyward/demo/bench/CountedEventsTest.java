package io.tallyward.demo.bench;

import static org.junit.jupiter.api.Assertions.assertEquals;

import com.fasterxml.jackson.databind.JsonNode;
import com.fasterxml.jackson.databind.ObjectMapper;
import java.io.IOException;
import java.util.Map;
import org.junit.jupiter.api.Test;

class CountedEventsTest {

    private static JsonNode partition() throws IOException {
        return new ObjectMapper().readTree("""
                        {"partition": 0, "ledgerUnits": 7, "rejected": {"unparsable": 2, "oversized": 1},
                         "experiments": {
                           "quay-banner": {"open": 10, "outcomes": {"trial": 100, "late": 0}},
                           "deck-map": {"open": 20, "outcomes": {"trial": 1000, "late": 5}}}}""");
    }

    @Test
    void addsUpWhateverBecameOfTheEvents() throws IOException {
        assertEquals(1_138, CountedEvents.in(partition()));
        assertEquals(2_276, CountedEvents.in(Map.of(0, partition(), 1, partition())));
        assertEquals(14, CountedEvents.units(Map.of(0, partition(), 1, partition())));
    }

    @Test
    void tellsOutcomesApart() throws IOException {
        assertEquals(
                Map.of("trial", 2_200L, "late", 10L, "open", 60L, "rejected", 6L),
                CountedEvents.byOutcome(Map.of(0, partition(), 1, partition())));
    }
}
