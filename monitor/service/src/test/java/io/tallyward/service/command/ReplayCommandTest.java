package io.tallyward.service.command;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertTrue;

import com.fasterxml.jackson.databind.JsonNode;
import com.fasterxml.jackson.databind.node.ObjectNode;
import java.io.IOException;
import java.nio.file.Files;
import java.nio.file.Path;
import java.util.ArrayList;
import java.util.Collections;
import java.util.Comparator;
import java.util.List;
import java.util.Locale;
import java.util.Random;
import org.junit.jupiter.api.BeforeEach;
import org.junit.jupiter.api.Test;
import org.junit.jupiter.api.io.TempDir;
import org.junit.jupiter.params.ParameterizedTest;
import org.junit.jupiter.params.provider.ValueSource;

class ReplayCommandTest {

    private static final String PLAN = """
            experiment: quay-banner
            question: does the wide quay photo bring more timetable clicks?
            owner: web-growth@northwater.example
            count: {attribution: PT30M, grace: PT10M, window: PT5M}
            variants: {plain: {share: 0.5, control: true}, wide: {share: 0.5}}
            test: {alpha: 0.05, baseline: 0.12, smallest-effect: 0.1}
            looks: {every: PT1H}
            run: {from: 2026-05-04T00:00:00Z, at-most: PT4H}
            """;

    @TempDir
    Path directory;

    private Path plans;

    @BeforeEach
    void writePlans() throws IOException {
        plans = Files.createDirectory(directory.resolve("plans"));
        Files.writeString(plans.resolve("quay.yaml"), PLAN);
    }

    /** Every event is placed by hand; the expected lines follow from the definitions of trial, success and outcome. */
    @Test
    void countsByTheDefinitions() throws IOException {
        CommandRun run = replay(
                event("view", "plain", "u1", "e1", "00:01:00"),
                event("view", "wide", "u2", "e2", "00:02:00"),
                event("click", "wide", "u2", "e3", "00:31:59"),
                event("click", "plain", "u1", "e4", "00:31:01"),
                event("view", "wide", "u3", "e5", "00:05:00"),
                event("view", "wide", "u3", "e6", "00:06:00"),
                event("view", "plain", "u3", "e7", "00:07:00"),
                event("click", "plain", "u4", "e8", "00:08:00"),
                event("view", "plain", "u5", "e9", "05:00:00"),
                "",
                event("view", "tall", "u6", "e10", "00:08:00"),
                event("view", "plain", "u6", "e11", "00:08:00").replace("quay-banner", "fare-chip"),
                "not json",
                "{}",
                event("view", "plain", "u7", "e12", "00:20:00").replace("}", ",\"received\":\"2026-05-04T00:14:59Z\"}"),
                event("view", "plain", "u8", "e13", "00:20:00").replace("}", ",\"received\":\"2026-05-04T00:15:00Z\"}"),
                "{\"pad\":\"" + "x".repeat(70_000) + "\"}");

        assertEquals(0, run.status());
        assertEquals(
                List.of(
                        window("00:00:00", "plain", 1, 0),
                        window("00:00:00", "wide", 1, 1),
                        window("00:05:00", "plain", 0, 0),
                        window("00:05:00", "wide", 1, 0),
                        window("00:20:00", "plain", 1, 0),
                        window("00:20:00", "wide", 0, 0)),
                run.ofType("window"));
        assertEquals(
                List.of("{\"type\":\"outcomes\",\"experiment\":\"quay-banner\",\"trial\":4,\"success\":1,\"repeat\":1,"
                        + "\"expired\":1,\"crossover\":1,\"orphan\":1,\"late\":0,\"outside\":1,\"duplicate\":0}"),
                run.ofType("outcomes"));
        assertEquals(
                List.of("{\"type\":\"input\",\"events\":16,\"rejected\":{\"unparsable\":1,\"missing-field\":1,"
                        + "\"unknown-experiment\":1,\"unknown-variant\":1,\"bad-time\":1,\"oversized\":1}}"),
                run.ofType("input"));
    }

    @ParameterizedTest
    @ValueSource(booleans = {false, true})
    void saysWhichRecordsWereRejected(boolean json) throws IOException {
        String early = ",\"received\":\"2026-05-04T00:14:59Z\"}";
        Path events = Files.write(
                directory.resolve("bad.jsonl"),
                List.of(
                        event("view", "plain", "u1", "e1", "00:01:00"),
                        "",
                        event("view", "tall", "u2", "e2", "00:08:00"),
                        "not json",
                        event("view", "plain", "u3", "e3", "00:08:00").replace("quay-banner", "fare-chip"),
                        "[]",
                        event("view", "plain", "u4", "e4", "00:20:00").replace("}", early),
                        event("view", "wide", "u5", "e5", "00:20:00").replace("}", early),
                        "{\"pad\":\"" + "x".repeat(70_000) + "\"}",
                        "{}"));
        List<String> arguments =
                new ArrayList<>(List.of("replay", "--plans", plans.toString(), "--events", events.toString()));
        arguments.addAll(json ? List.of("--json") : List.of());
        CommandRun run = CommandRun.of(arguments.toArray(String[]::new));
        assertEquals(0, run.status());
        assertEquals(
                List.of(
                        events
                                + ":3: unknown-variant: the plan of quay-banner has no variant \"tall\" (1 of this kind)",
                        events + ":4: unparsable: the value is not JSON, at byte 0 (1 of this kind)",
                        events + ":5: unknown-experiment: no plan names the experiment \"fare-chip\" (1 of this kind)",
                        events + ":6: unparsable: the value is an array (expected: a JSON object) (1 of this kind)",
                        events + ":7: bad-time: the event time 2026-05-04T00:20:00Z lies more than PT5M ahead of its "
                                + "receipt at 2026-05-04T00:14:59Z (2 of this kind)",
                        events + ":9: oversized: the record has more than 65536 bytes (1 of this kind)",
                        events + ":10: missing-field: kind at /kind: missing (expected: \"click\" or \"view\") "
                                + "(1 of this kind)"),
                json ? problems(run) : run.err());
    }

    private static List<String> problems(CommandRun run) {
        return run.json().stream()
                .filter(line -> line.get("type").asText().equals("problem"))
                .map(line -> line.get("message").asText())
                .toList();
    }

    /** The run ends with too little in it for a look: there is one record, of the end, and the text says what it says. */
    @Test
    void showsWhatTheLastRecordSays() throws IOException {
        String[] lines = {
            event("view", "plain", "u1", "e1", "00:01:00"),
            event("view", "wide", "u2", "e2", "03:50:00"),
            event("view", "wide", "u3", "e3", "09:00:00")
        };
        List<JsonNode> records = replay(lines).json().stream()
                .filter(line -> line.get("type").asText().equals("decision"))
                .toList();
        JsonNode last = records.get(records.size() - 1);
        assertEquals("end", last.get("occasion").asText());
        assertEquals(0, last.get("comparisons").size());
        CommandRun text = CommandRun.of(
                "replay",
                "--plans",
                plans.toString(),
                "--events",
                directory.resolve("events.jsonl").toString());
        assertEquals(
                "quay-banner: " + last.get("verdict").asText() + ", data "
                        + last.get("trust").asText(),
                text.out().get(0));
    }

    /** Four of five units are shown the control of an even split; half of all click. */
    @Test
    void saysFirstThatAVerdictIsHeld() throws IOException {
        List<String> lines = new ArrayList<>();
        for (int unit = 0; unit < 400; unit++) {
            String variant = unit % 5 == 0 ? "wide" : "plain";
            lines.add(event("view", variant, "u" + unit, "v" + unit, Stream.time(36 * unit)));
            if (unit % 2 == 0) {
                lines.add(event("click", variant, "u" + unit, "c" + unit, Stream.time(36 * unit + 10)));
            }
        }
        Path events = Files.write(directory.resolve("events.jsonl"), lines);
        List<String> text = CommandRun.of("replay", "--plans", plans.toString(), "--events", events.toString())
                .out();
        assertEquals("quay-banner: exhausted, held because of mismatch", text.get(0));
        assertTrue(
                text.contains("successes at that look: plain 160 of 320 trials, wide 40 of 80 trials"),
                text.toString());
    }

    @ParameterizedTest
    @ValueSource(ints = {1, 2, 7})
    void agreesWithABatchCountWhateverThePartitions(int partitions) throws IOException {
        Stream stream = new Stream(20260504L);
        CommandRun run = replay(stream.lines(), "--partitions", String.valueOf(partitions));
        CommandRun single = replay(stream.lines());

        String seed = "seed " + stream.seed;
        assertEquals(stream.windows(), run.ofType("window"), seed);
        assertEquals(single.ofType("outcomes"), run.ofType("outcomes"), seed);
        assertEquals(single.ofType("input"), run.ofType("input"), seed);
        assertEquals(decisions(single), decisions(run), seed);
        assertEquals(5, run.ofType("decision").size(), "the plan and four decisions, " + seed);
    }

    /** Decisions without what depends on when a partition saw an event of a sealed trial: its outcome, and the digests. */
    private static List<JsonNode> decisions(CommandRun run) {
        return run.json().stream()
                .filter(line -> line.get("type").asText().equals("decision"))
                .map(line -> ((ObjectNode) line).<JsonNode>without(List.of("outcomes", "previous", "hash")))
                .toList();
    }

    @Test
    void showsTablesToPeople() throws IOException {
        Path events = Files.write(directory.resolve("events.jsonl"), new Stream(7).lines());
        CommandRun run = CommandRun.of("replay", "--plans", plans.toString(), "--events", events.toString());
        assertEquals(0, run.status());
        assertTrue(
                run.out().get(0).matches("quay-banner: [a-z-]+, data [a-z]+"),
                run.out().get(0));
        assertEquals("counts at the end of the input", run.out().get(1));
        assertEquals("variant  epoch  trials  successes    rate", run.out().get(2));
        int legend = run.out().indexOf("Windows still open at the end of the input are counted too.");
        assertEquals("", run.out().get(legend - 1));
        assertTrue(run.out().get(legend + 1).startsWith("At each look z, of variant minus control, is held against"));
        assertEquals(
                "events read: 3000, rejected: none", run.out().get(run.out().size() - 1));
        assertEquals(List.of(), run.err());
    }

    /** The lines say what the record says, in points and per cent. */
    @Test
    void showsTheAdjustedEstimateWhereAComparisonEnded() throws IOException {
        Stream stream = new Stream(7);
        List<JsonNode> records = replay(stream.lines()).json().stream()
                .filter(line -> line.get("type").asText().equals("decision"))
                .toList();
        JsonNode ended = records.get(records.size() - 1).get("comparisons").get(0);
        JsonNode difference = ended.get("adjusted").get("difference");
        List<String> text = CommandRun.of(
                        "replay",
                        "--plans",
                        plans.toString(),
                        "--events",
                        directory.resolve("events.jsonl").toString())
                .out();
        List<String> adjusted = text.stream()
                .filter(line -> line.startsWith("difference in points, adjusted for the looks"))
                .toList();
        assertEquals(1, adjusted.size(), text.toString());
        for (String end : List.of("value", "lower", "upper")) {
            String figure = String.format(
                    Locale.ROOT, "%+.3f", 100 * difference.get(end).asDouble());
            assertTrue(adjusted.get(0).contains(figure), figure + " in " + adjusted.get(0));
        }
        String naive = String.format(
                Locale.ROOT, "%+.3f", 100 * ended.get("difference").asDouble());
        assertTrue(
                text.stream().anyMatch(line -> line.matches("difference in points, naive +\\Q" + naive + "\\E")),
                text.toString());
        assertTrue(text.stream().anyMatch(line -> line.startsWith("wide, when it ended ")));
    }

    @Test
    void refusesFilesItCannotRead() {
        Path missing = directory.resolve("missing.jsonl");
        assertEquals(
                new CommandRun(
                        2,
                        List.of(),
                        List.of(missing + ": cannot be read: there is no such file "
                                + "(expected: a file of events, one JSON document per line)")),
                CommandRun.of("replay", "--plans", plans.toString(), "--events", missing.toString()));
        assertEquals(
                new CommandRun(
                        2,
                        List.of(),
                        List.of(plans + ": a directory (expected: a file of events, one JSON document per line)")),
                CommandRun.of("replay", "--plans", plans.toString(), "--events", plans.toString()));
    }

    private CommandRun replay(String... lines) throws IOException {
        return replay(List.of(lines));
    }

    private CommandRun replay(List<String> lines, String... more) throws IOException {
        Path events = Files.write(directory.resolve("events.jsonl"), lines);
        List<String> arguments = new ArrayList<>(
                List.of("replay", "--json", "--plans", plans.toString(), "--events", events.toString()));
        arguments.addAll(List.of(more));
        return CommandRun.of(arguments.toArray(String[]::new));
    }

    private static String event(String kind, String variant, String unit, String id, String time) {
        return "{\"kind\":\"" + kind + "\",\"experiment\":\"quay-banner\",\"variant\":\"" + variant + "\",\"unit\":\""
                + unit + "\",\"id\":\"" + id + "\",\"at\":\"2026-05-04T" + time + "Z\"}";
    }

    private static String window(String start, String variant, long trials, long successes) {
        return "{\"type\":\"window\",\"experiment\":\"quay-banner\",\"epoch\":0,\"start\":\"2026-05-04T" + start
                + "Z\",\"variant\":\"" + variant + "\",\"trials\":" + trials + ",\"successes\":" + successes + "}";
    }

    /**
     * Three thousand events in a little disorder, and their counts by another way: sorted as a whole, unit by unit, with
     * no windows, watermarks or ledger.
     */
    private static final class Stream {

        private static final int EVENTS = 3_000;
        private static final int UNITS = 900;
        private static final int RUN_SECONDS = 4 * 3_600;

        /** Below the grace of the plan, so that no event is late. */
        private static final int DISORDER_SECONDS = 300;

        private record Item(boolean click, int unit, int id, int second, int arrival) {
            String variant() {
                return unit % 2 == 0 ? "plain" : "wide";
            }
        }

        private final long seed;
        private final List<Item> items = new ArrayList<>();

        Stream(long seed) {
            this.seed = seed;
            Random random = new Random(seed);
            for (int id = 0; id < EVENTS; id++) {
                int unit = random.nextInt(UNITS);
                boolean click = random.nextInt(10) < 6;
                int second = random.nextInt(RUN_SECONDS);
                items.add(new Item(click, unit, id, second, second + random.nextInt(DISORDER_SECONDS)));
            }
        }

        List<String> lines() {
            return items.stream()
                    .sorted(Comparator.comparingInt(Item::arrival))
                    .map(item -> event(
                            item.click ? "click" : "view",
                            item.variant(),
                            "unit-" + item.unit,
                            String.format("e%05d", item.id),
                            time(item.second)))
                    .toList();
        }

        List<String> windows() {
            long[][][] counts = new long[RUN_SECONDS / 300][2][2];
            for (int unit = 0; unit < UNITS; unit++) {
                count(unit, counts);
            }
            List<String> lines = new ArrayList<>();
            for (int w = 0; w < counts.length; w++) {
                if (counts[w][0][0] + counts[w][1][0] > 0) {
                    lines.add(window(time(w * 300), "plain", counts[w][0][0], counts[w][0][1]));
                    lines.add(window(time(w * 300), "wide", counts[w][1][0], counts[w][1][1]));
                }
            }
            return Collections.unmodifiableList(lines);
        }

        private void count(int unit, long[][][] counts) {
            List<Item> own = items.stream().filter(item -> item.unit == unit).toList();
            own.stream()
                    .filter(item -> !item.click)
                    .mapToInt(Item::second)
                    .min()
                    .ifPresent(first -> {
                        boolean success = own.stream()
                                .anyMatch(item -> item.click && item.second >= first && item.second <= first + 1_800);
                        counts[first / 300][unit % 2][0]++;
                        counts[first / 300][unit % 2][1] += success ? 1 : 0;
                    });
        }

        private static String time(int second) {
            return String.format("%02d:%02d:%02d", second / 3_600, second / 60 % 60, second % 60);
        }
    }
}
