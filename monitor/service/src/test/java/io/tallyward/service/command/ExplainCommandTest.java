package io.tallyward.service.command;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertFalse;
import static org.junit.jupiter.api.Assertions.assertTrue;

import com.fasterxml.jackson.databind.JsonNode;
import com.fasterxml.jackson.databind.json.JsonMapper;
import java.io.IOException;
import java.nio.file.Files;
import java.nio.file.Path;
import java.util.ArrayList;
import java.util.List;
import java.util.Locale;
import org.junit.jupiter.api.Test;
import org.junit.jupiter.api.io.TempDir;

class ExplainCommandTest {

    @TempDir
    Path directory;

    private CommandRun explain(List<String> log, String... options) throws IOException {
        Path file = Files.write(directory.resolve("decisions.jsonl"), log);
        List<String> arguments = new ArrayList<>(List.of("explain", "--experiment", "quay-banner", file.toString()));
        arguments.addAll(List.of(options));
        return CommandRun.of(arguments.toArray(String[]::new));
    }

    private static String text(CommandRun run) {
        return String.join(" ", run.out()).replaceAll("\\s+", " ");
    }

    private static JsonNode record(String line) throws IOException {
        return new JsonMapper().readTree(line);
    }

    @Test
    void tellsAStopWithTheNumbersOfItsRecord() throws IOException {
        List<String> log = DecisionLogs.quayBanner(directory);
        CommandRun run = explain(log);
        assertEquals(0, run.status(), run.toString());
        assertEquals("quay-banner: wide does better than plain.", run.out().get(0));
        String text = text(run);
        JsonNode settled = record(log.get(log.size() - 1));
        JsonNode look = settled.get("comparisons").get(0);
        for (String part : List.of(
                "does the wide quay photo bring more timetable clicks?",
                String.format(
                        Locale.ROOT,
                        "%,d units that saw plain",
                        settled.at("/counts/0/trials").asLong()),
                String.format(
                        Locale.ROOT,
                        "%,d that saw wide",
                        settled.at("/counts/1/trials").asLong()),
                String.format(
                        Locale.ROOT,
                        "a difference of %+.2f percentage points",
                        100 * look.get("difference").asDouble()),
                String.format(
                        Locale.ROOT,
                        "between %+.2f and %+.2f points (confidence 95 %%",
                        100 * look.at("/adjusted/difference/lower").asDouble(),
                        100 * look.at("/adjusted/difference/upper").asDouble()),
                String.format(
                        Locale.ROOT,
                        "z, was %.2f; at this look %.2f was needed",
                        look.get("z").asDouble(),
                        look.get("upper").asDouble()),
                "The plan allows a false alarm about wide in 5 % of such experiments",
                "The data were trusted",
                "What this does not say: that the gain will be exactly this large",
                "web-growth@northwater.example may end the experiment and keep wide",
                "it is not for clinical or safety decisions")) {
            assertTrue(text.contains(part), part + " in " + text);
        }
    }

    @Test
    void tellsAnEarlierLookWithoutWhatCameLater() throws IOException {
        String text = text(explain(DecisionLogs.quayBanner(directory), "--look", "1"));
        assertTrue(text.startsWith("quay-banner: no difference between wide and plain is established yet."), text);
        assertTrue(text.contains("This was look 1, with everything counted up to 2026-05-04 06:00 UTC."), text);
        assertTrue(text.contains("The chance that a benefit is still found by its end is"), text);
        assertFalse(text.contains("clinical"), "no stop is told");
    }

    @Test
    void holdsBackWhatCannotBeBelieved() throws IOException {
        String text = text(explain(DecisionLogs.log(directory, 0.4, 0.2, 0.3)));
        assertTrue(text.startsWith("quay-banner: no verdict on wide, as the data are not trusted."), text);
        assertTrue(text.contains("would be \"stop-benefit\"; it is held back"), text);
        assertTrue(text.contains("What to do: find where units of one variant are lost"), text);
        assertFalse(text.contains("p-value"), text);
    }

    @Test
    void saysThatNothingFoundIsNotNothingThere() throws IOException {
        String text = text(explain(DecisionLogs.log(directory, 0.5, 0.2, 0.2)));
        assertTrue(text.startsWith("quay-banner: no difference between wide and plain was found."), text);
        assertTrue(text.contains("What this does not say: that both are the same"), text);
    }

    @Test
    void givesMachinesTheSame() throws IOException {
        List<String> log = DecisionLogs.quayBanner(directory);
        JsonNode object = explain(log, "--json").json().get(0);
        assertEquals("explanation", object.get("type").asText());
        assertEquals("stop-benefit", object.get("verdict").asText());
        assertEquals(record(log.get(log.size() - 1)).get("hash"), object.get("hash"));
        assertEquals(2, object.get("variants").size());
        assertTrue(object.get("right").asBoolean());
    }

    @Test
    void warnsWhereTheLogDoesNotProveItself() throws IOException {
        List<String> log = DecisionLogs.quayBanner(directory);
        log = new ArrayList<>(log);
        log.set(2, log.get(2).replaceFirst("\"z\":[0-9.]+", "\"z\":9.5"));
        CommandRun run = explain(log);
        assertEquals(1, run.status());
        assertTrue(run.err().get(0).startsWith("Do not rely on this: quay-banner does not prove itself. At record 3"));
    }

    @Test
    void refusesWhatIsNotThere() throws IOException {
        List<String> log = DecisionLogs.quayBanner(directory);
        CommandRun late = explain(log, "--look", "99");
        assertEquals(2, late.status());
        assertTrue(
                late.err().get(0).contains("no look 99 at quay-banner (expected: 1 to"),
                late.err().toString());
        CommandRun other = CommandRun.of(
                "explain",
                "--experiment",
                "deck-map",
                directory.resolve("decisions.jsonl").toString());
        assertEquals(2, other.status());
        assertTrue(
                other.err().get(0).contains("no record of deck-map (expected: one of quay-banner)"),
                other.err().toString());
        assertEquals(2, explain(log.subList(1, log.size())).status());
    }
}
