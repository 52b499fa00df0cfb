package io.tallyward.service.command;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertFalse;
import static org.junit.jupiter.api.Assertions.assertTrue;

import com.fasterxml.jackson.databind.JsonNode;
import java.io.IOException;
import java.nio.file.Files;
import java.nio.file.Path;
import java.util.ArrayList;
import java.util.List;
import java.util.Locale;
import org.junit.jupiter.api.BeforeEach;
import org.junit.jupiter.api.Test;
import org.junit.jupiter.api.io.TempDir;

/** What another plan would have said is what a replay under that plan says, and is never taken for a decision. */
class ReplayAsIfTest {

    @TempDir
    Path directory;

    private Path other;

    @BeforeEach
    void writeLog() throws IOException {
        DecisionLogs.quayBanner(directory);
        String plan = Files.readString(directory.resolve("plans").resolve("quay-banner.yaml"));
        other = Files.createDirectory(directory.resolve("other")).resolve("pocock.yaml");
        Files.writeString(other, plan.replace("obrien-fleming", "pocock").replace("PT6H", "PT4H"));
    }

    private CommandRun replay(String plans, String... more) {
        List<String> arguments = new ArrayList<>(List.of(
                "replay",
                "--plans",
                directory.resolve(plans).toString(),
                "--events",
                directory.resolve("events.jsonl").toString()));
        arguments.addAll(List.of(more));
        return CommandRun.of(arguments.toArray(String[]::new));
    }

    private static List<JsonNode> of(CommandRun run, String type) {
        return run.json().stream()
                .filter(line -> line.get("type").asText().equals(type))
                .toList();
    }

    @Test
    void saysWhatReplaysUnderEachPlanSay() {
        CommandRun run = replay("plans", "--json", "--as-if", other.toString());
        assertEquals(0, run.status(), run.err().toString());
        JsonNode found = of(run, "hypothetical").get(0);
        assertEquals(
                "decided after the fact; not a decision", found.get("remark").asText());
        int planned = sameLooks(found, "planned", of(replay("plans", "--json"), "decision"));
        int asIf = sameLooks(found, "asIf", of(replay("other", "--json"), "decision"));
        assertTrue(planned > 1 && asIf > 1, planned + " and " + asIf + " looks");
    }

    /** Every look of the records stands on its side, at its moment, and there are no others. */
    private static int sameLooks(JsonNode found, String side, List<JsonNode> records) {
        List<String> expected = new ArrayList<>();
        JsonNode ending = null;
        String end = "";
        for (JsonNode record : records) {
            for (JsonNode look : record.get("comparisons")) {
                String moment = record.get("windowEnd").asText();
                expected.add(figures(moment, look));
                if (ending == null && look.get("verdict").asText().startsWith("stop-")) {
                    ending = look;
                    end = moment;
                }
            }
        }
        List<String> shown = new ArrayList<>();
        for (JsonNode look : found.get("looks")) {
            if (!look.get(side).isNull()) {
                shown.add(figures(look.get("windowEnd").asText(), look.get(side)));
            }
        }
        assertEquals(expected, shown);
        JsonNode told = found.get(side).get("endings").get(0);
        assertEquals(ending.get("look"), told.get("look"));
        assertEquals(ending.get("verdict"), told.get("verdict"));
        assertEquals(end, told.get("windowEnd").asText());
        return shown.size();
    }

    private static String figures(String moment, JsonNode look) {
        StringBuilder text = new StringBuilder(moment);
        for (String name : List.of("look", "z", "informationFraction", "upper", "lower", "alphaSpent", "verdict")) {
            text.append(' ').append(look.get(name).asText());
        }
        return text.toString();
    }

    @Test
    void leavesDecisionsAsTheyAre() throws IOException {
        List<String> with = new ArrayList<>(
                replay("plans", "--json", "--as-if", other.toString()).out());
        assertTrue(with.removeIf(line -> line.contains("\"hypothetical\"")));
        assertEquals(replay("plans", "--json").out(), with);
        CommandRun run = replay("plans", "--json", "--as-if", other.toString());
        Path log = Files.write(directory.resolve("log.jsonl"), run.out());
        assertEquals(0, CommandRun.of("verify", log.toString()).status(), "the log is one of decisions alone");
    }

    @Test
    void showsBothSidesToPeople() {
        CommandRun run = replay("plans", "--as-if", other.toString());
        JsonNode found = of(replay("plans", "--json", "--as-if", other.toString()), "hypothetical")
                .get(0);
        assertEquals(
                "HYPOTHETICAL, decided after the fact; not a decision.",
                run.out().get(0));
        assertTrue(line(run, "test.benefit.spending").matches(".* obrien-fleming +pocock"));
        assertTrue(line(run, "looks.every").matches(".* PT6H +PT4H"));
        assertFalse(run.out().stream().anyMatch(line -> line.startsWith("run.from")), "only what differs");
        String ends = line(run, "wide  ");
        for (String side : List.of("planned", "asIf")) {
            JsonNode ending = found.get(side).get("endings").get(0);
            assertTrue(
                    ends.contains("stop-benefit at look " + ending.get("look") + ", "
                            + ending.get("windowEnd").asText()),
                    ends);
        }
        JsonNode look = found.get("looks").get(0);
        String shown = line(run, look.get("windowEnd").asText());
        assertTrue(look.get("planned").isNull() && shown.contains(" - "), shown);
        assertTrue(
                shown.contains(String.format(
                        Locale.ROOT, "%.4f", look.get("asIf").get("upper").asDouble())),
                shown);
    }

    private static String line(CommandRun run, String start) {
        return run.out().stream()
                .filter(line -> line.startsWith(start))
                .findFirst()
                .orElseThrow(() -> new AssertionError(start + " in " + run.out()));
    }

    @Test
    void refusesAPlanThatIsOfNoPlannedExperiment() throws IOException {
        String plan = Files.readString(other);
        Path file = directory.resolve("wrong.yaml");
        Files.writeString(file, plan.replace("quay-banner", "fare-chip"));
        assertEquals(
                new CommandRun(
                        2, List.of(), List.of(file + ": experiment: fare-chip (expected: one of [quay-banner])")),
                replay("plans", "--as-if", file.toString()));
        Files.writeString(file, plan.replace("wide: {", "tall: {"));
        CommandRun run = replay("plans", "--as-if", file.toString());
        assertEquals(2, run.status());
        assertTrue(run.err().get(0).startsWith(file + ": variants: tall (expected: variants of the plan"));
    }
}
