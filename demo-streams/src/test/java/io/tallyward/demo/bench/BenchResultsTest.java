package io.tallyward.demo.bench;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertThrows;
import static org.junit.jupiter.api.Assertions.assertTrue;

import com.fasterxml.jackson.databind.JsonNode;
import com.fasterxml.jackson.databind.ObjectMapper;
import java.io.IOException;
import java.util.ArrayList;
import java.util.List;
import org.junit.jupiter.api.Test;

class BenchResultsTest {

    /** The machine is half as fast in the second round: a ratio of medians over all rounds would not be 3. */
    private static BenchResults results() {
        BenchResults results = new BenchResults();
        for (int slowness : new int[] {1, 2, 4}) {
            results.add(BenchCase.RAW_POLL, new Measurement(2_000_000, slowness, 4));
            results.add(BenchCase.RAW_PARSE, new Measurement(2_000_000, 2.0 * slowness, 4));
            results.add(BenchCase.COUNT_UNIT, new Measurement(2_000_000, 3.0 * slowness, 8));
            results.add(BenchCase.COUNT_VIEW, new Measurement(2_000_000, 4.0 * slowness, 8));
            results.add(BenchCase.STREAMS_DSL, new Measurement(2_000_000, 20.0 * slowness, 40));
        }
        return results;
    }

    @Test
    void printsMediansAndRatiosAsJson() throws IOException {
        JsonNode all = new ObjectMapper().readTree(results().json());
        List<String> names = new ArrayList<>();
        all.get("cases").forEach(each -> names.add(each.get("name").asText()));
        assertEquals(List.of("raw-poll", "raw-parse", "count-unit", "count-view", "streams-dsl"), names);
        JsonNode count = all.get("cases").get(2);
        assertEquals(3.0, count.get("cpuSecondsPerMillion").asDouble());
        assertEquals(3.0, count.get("ratioToRawPoll").asDouble());
        assertEquals(250_000, count.get("eventsPerSecond").asDouble());
    }

    @Test
    void takesTheRatioWithinARound() {
        BenchResults results = new BenchResults();
        double[] polls = {1, 2, 6};
        double[] counts = {3, 7, 12};
        for (int round = 0; round < polls.length; round++) {
            results.add(BenchCase.RAW_POLL, new Measurement(1_000_000, polls[round], 1));
            results.add(BenchCase.COUNT_UNIT, new Measurement(1_000_000, counts[round], 1));
        }
        assertEquals(3.0, results.ratioToRawPoll(BenchCase.COUNT_UNIT));
    }

    @Test
    void takesTheMeanOfTheMiddleTwo() {
        assertEquals(2.5, BenchResults.median(new double[] {9, 2, 3, 1}));
        assertEquals(3, BenchResults.median(new double[] {9, 1, 3}));
    }

    @Test
    void readsBackWhatAProcessSays() {
        Measurement said = new Measurement(20_000_000, 12.5, 31.25);
        assertEquals(said, Measurement.in("WARN something\n" + said.line() + "\n"));
        assertThrows(IllegalStateException.class, () -> Measurement.in("WARN something\n"));
        assertTrue(results().lines().get(4).startsWith("count-unit"), results().lines()::toString);
    }
}
