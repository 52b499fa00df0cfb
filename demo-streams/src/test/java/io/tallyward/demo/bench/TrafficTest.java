package io.tallyward.demo.bench;

import static org.junit.jupiter.api.Assertions.assertArrayEquals;
import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertTrue;

import com.fasterxml.jackson.databind.JsonNode;
import com.fasterxml.jackson.databind.ObjectMapper;
import java.io.IOException;
import java.nio.file.Files;
import java.nio.file.Path;
import java.util.HashSet;
import java.util.Set;
import java.util.stream.Stream;
import org.junit.jupiter.api.Test;
import org.junit.jupiter.api.io.TempDir;

class TrafficTest {

    private static final int EVENTS = 100_000;
    private static final Traffic TRAFFIC = Traffic.ofStories();

    @Test
    void isAsItsDescriptionSays() throws IOException {
        ObjectMapper mapper = new ObjectMapper();
        Set<String> ids = new HashSet<>();
        Set<String> units = new HashSet<>();
        long bytes = 0;
        int clicks = 0;
        for (int number = 0; number < EVENTS; number++) {
            Traffic.Sent event = TRAFFIC.event(number);
            JsonNode json = mapper.readTree(event.value());
            assertEquals(json.get("unit").asText(), new String(event.key()));
            bytes += event.value().length;
            clicks += json.get("kind").asText().equals("click") ? 1 : 0;
            ids.add(json.get("id").asText());
            units.add(json.get("unit").asText());
        }
        assertEquals(0.98, (double) ids.size() / EVENTS, 1e-9);
        assertEquals(0.12, (double) clicks / EVENTS, 0.005);
        assertEquals(178, (double) bytes / EVENTS, 3);
        assertTrue(units.size() > EVENTS / 4, units.size() + " units");
    }

    @Test
    void isSpreadOverAsManyExperimentsAsOneLikes(@TempDir Path plans) throws IOException {
        Traffic spread = Traffic.over(100);
        spread.writePlans(plans);
        try (Stream<Path> files = Files.list(plans)) {
            assertEquals(100, files.count());
        }
        assertTrue(Files.readString(plans.resolve("quay-7.yaml")).startsWith("experiment: quay-7\n"));
        Set<String> seen = new HashSet<>();
        ObjectMapper mapper = new ObjectMapper();
        for (int number = 0; number < EVENTS; number++) {
            Traffic.Sent event = spread.event(number);
            seen.add(mapper.readTree(event.value()).get("experiment").asText());
            assertArrayEquals(TRAFFIC.event(number).key(), event.key());
        }
        assertEquals(Set.copyOf(spread.experiments()), seen);
    }

    @Test
    void isAFunctionOfTheNumber() {
        for (int number = 0; number < 1_000; number++) {
            assertArrayEquals(
                    TRAFFIC.event(number).value(), TRAFFIC.event(number).value());
        }
    }
}
