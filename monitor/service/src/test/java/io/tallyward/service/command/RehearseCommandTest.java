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
import org.junit.jupiter.api.BeforeEach;
import org.junit.jupiter.api.Test;
import org.junit.jupiter.api.io.TempDir;

class RehearseCommandTest {

    private static final String PLAN = """
            experiment: quay-banner
            question: does the wide quay photo bring more timetable clicks?
            owner: web-growth@northwater.example
            variants: {plain: {share: 0.5, control: true}, wide: {share: 0.5}}
            test: {alpha: 0.05, sides: two, power: 0.8, baseline: 0.12, smallest-effect: 0.03}
            looks: {every: P5D}
            run: {from: 2026-05-04T00:00:00Z, at-most: P20D}
            """;

    @TempDir
    Path directory;

    private Path plan;

    @BeforeEach
    void writePlan() throws IOException {
        plan = Files.writeString(directory.resolve("quay-banner.yaml"), PLAN);
    }

    @Test
    void writesOneJsonObject() {
        JsonNode root = json("--runs=60", "--seed=7", "--rates=wide=0.16");
        assertEquals("quay-banner", root.get("experiment").asText());
        assertEquals(60, root.get("runs").asLong());
        assertEquals(7, root.get("seed").asLong());
        assertEquals(0.12, root.get("rates").get("plain").asDouble());
        assertEquals(0.16, root.get("rates").get("wide").asDouble());
        assertEquals("random", root.get("split").asText());
        for (String rate : List.of(
                "rejectionRate",
                "benefitRate",
                "harmRate",
                "futilityRate",
                "exhaustedRate",
                "withheldRate",
                "mismatchRate",
                "naivePeeking")) {
            assertRate(root, rate);
        }
        for (String mean : List.of("expectedLooks", "expectedTrials", "expectedDays")) {
            assertTrue(root.get(mean).asDouble() > 0, mean);
            assertTrue(root.get(mean + "StandardError").isNumber(), mean);
        }
        assertEquals(
                root.get("rejectionRate").asDouble(),
                root.get("benefitRate").asDouble() + root.get("harmRate").asDouble(),
                1e-12);
        assertTrue(root.get("benefitRate").asDouble() > 0.6);
        assertEquals(1, root.get("challengers").size());
        assertChallenger(root.get("challengers").get(0));
    }

    private static void assertChallenger(JsonNode challenger) {
        assertEquals("wide", challenger.get("variant").asText());
        assertEquals(0.04, challenger.get("trueDifference").asDouble(), 1e-12);
        assertRate(challenger, "rejectionRate");
        assertRate(challenger, "withheldRate");
        long runs = 0;
        for (JsonNode stop : challenger.get("stops")) {
            runs += stop.get("runs").asLong();
            assertTrue(stop.get("benefit").isNumber() && stop.get("look").asInt() <= 4);
        }
        assertEquals(60, runs);
        JsonNode estimates = challenger.get("estimates");
        assertEquals(60, estimates.get("runs").asLong());
        assertEquals(0.95, estimates.get("level").asDouble(), 1e-12);
        for (String kind : List.of("naive", "repeated", "adjusted")) {
            assertRate(estimates.get(kind), "coverage");
        }
        for (String kind : List.of("naive", "adjusted")) {
            assertTrue(Math.abs(estimates.get(kind).get("bias").asDouble()) < 0.02);
            assertTrue(estimates.get(kind).get("biasStandardError").asDouble() > 0);
            assertRate(estimates.get(kind), "tooLow");
        }
    }

    private static void assertRate(JsonNode object, String name) {
        double rate = object.get(name).asDouble();
        JsonNode interval = object.get(name + "Interval");
        assertEquals(2, interval.size(), name);
        assertTrue(interval.get(0).asDouble() <= rate && rate <= interval.get(1).asDouble(), name);
        assertTrue(interval.get(1).asDouble() - interval.get(0).asDouble() > 0, name);
        assertTrue(object.get(name + "StandardError").isNumber(), name);
    }

    @Test
    void leavesEstimatesOutOnRequest() {
        JsonNode root = json("--runs=20", "--no-estimates", "--fixed-split", "--threads=1");
        assertFalse(root.get("challengers").get(0).has("estimates"));
        assertEquals("fixed", root.get("split").asText());
    }

    @Test
    void takesMoreTrafficWhenTold() {
        assertEquals(
                20 * 5_000,
                json("--runs=2", "--per-day=5000").get("trialsOfFullRun").asLong());
    }

    @Test
    void saysInWordsWhatHappened() {
        CommandRun run = run("--runs=100", "--seed=7", "--rates=plain=0.12,wide=0.15");
        assertEquals(0, run.status());
        assertEquals(List.of(), run.err());
        assertEquals(
                "quay-banner: does the wide quay photo bring more timetable clicks?",
                run.out().get(0));
        assertTrue(
                run.out().get(1).startsWith("100 runs, seed 7; up to "),
                run.out().get(1));
        assertEquals("true rates: plain 0.12, wide 0.15", run.out().get(2));
        assertEquals(
                "counts are considered every P1D, 20 times in a full run",
                run.out().get(3));
        for (String start : List.of(
                "verdict of benefit or harm ",
                "uncorrected peeking would find something ",
                "trials, all variants ",
                "looks that waited ",
                "wide against plain, true difference +3.000 points",
                "stopped at look ",
                "naive: as observed ",
                "adjusted: median-unbiased, stage-wise ",
                "repeated confidence interval ",
                "benefit      with a true benefit this is the chance to find it; the plan asks for 80.00 %")) {
            assertTrue(run.out().stream().anyMatch(line -> line.startsWith(start)), start);
        }
        assertTrue(run("--runs=3").out().stream().anyMatch(line -> line.contains("every one is a false alarm")));
    }

    /** One variant has an effect and the other has none; the rows say what they count. */
    @Test
    void namesRowsForSeveralVariants() throws IOException {
        Files.writeString(
                plan,
                PLAN.replace("wide: {share: 0.5}", "wide: {share: 0.3}, tall: {share: 0.2}")
                        + "futility: {predictive-power: 0.05}\n");
        List<String> out = run("--runs=40", "--seed=7", "--rates=wide=0.16").out();
        for (String start : List.of(
                "a variant whose verdict is told is no longer shown",
                "at least one variant with benefit or harm ",
                "  at least one that has no true difference ",
                "all given up as futile ",
                "tall against plain, true difference 0",
                "verdict      on a variant without a true difference every one is a false alarm",
                "benefit      of each variant by itself",
                "futility     runs given up as futile have no adjusted estimate")) {
            assertTrue(out.stream().anyMatch(line -> line.startsWith(start)), start);
        }
        out.forEach(line -> assertTrue(line.length() <= BoundariesText.WIDTH, line));
        JsonNode root = json("--runs=40", "--seed=7", "--rates=wide=0.16");
        assertRate(root, "falseAlarmRate");
        JsonNode tall = root.get("challengers").get(1);
        assertEquals(
                tall.get("rejectionRate").asDouble(), root.get("falseAlarmRate").asDouble(), 1e-12);
        assertTrue(tall.get("powerFutilityObeyed").asDouble() < 0.8);
        long futile = Math.round(40 * tall.get("futilityRate").asDouble());
        assertEquals(40 - futile, tall.get("estimates").get("runs").asLong(), "no estimate after futility");
        assertEquals(0.8, root.get("power").asDouble());
        assertEquals("P1D", root.get("step").asText());
    }

    @Test
    void saysWhereTheTrafficIsTooLittleAndErrorsAreUnknown() {
        List<String> out = run("--runs=1", "--per-day=10").out();
        assertTrue(out.stream().anyMatch(line -> line.startsWith("Too little traffic: the plan needs ")));
        assertTrue(out.stream().anyMatch(line -> line.matches("days +20.00 +-")), out.toString());
        assertFalse(run("--runs=1").out().stream().anyMatch(line -> line.startsWith("Too little traffic")));
    }

    @Test
    void saysThatViewsAreRehearsedAsIfIndependent() throws IOException {
        assertFalse(json("--runs=1").has("remark"));
        Files.writeString(plan, PLAN + "count: {by: view}\n");
        List<String> out = run("--runs=20").out();
        assertTrue(
                out.stream().anyMatch(line -> line.startsWith("Every unit is rehearsed with one view.")),
                out.toString());
        JsonNode root = json("--runs=20");
        assertTrue(root.get("remark").asText().startsWith("Every unit is rehearsed with one view."));
        assertTrue(root.get("expectedLooks").asDouble() > 1, root.toString());
    }

    @Test
    void refusesRatesItCannotUse() {
        assertRefused(
                "--rates: unknown variant wied (expected: plain or wide). Did you mean wide?", "--rates=wied=0.1");
        assertRefused("--rates: wide=1.2 (expected: a number above 0 and below 1)", "--rates=wide=1.2");
        assertRefused("--rates: wide=0 (expected: a number above 0 and below 1)", "--rates=wide=0");
        assertRefused("--rates: wide=NaN (expected: a number above 0 and below 1)", "--rates=wide=NaN");
        assertRefused("--rates: wide (expected: variant=rate)", "--rates=wide");
        assertRefused("--rates: an empty entry (expected: variant=rate)", "--rates=wide=0.1,");
        assertRefused("--rates: wide twice (expected: each variant once)", "--rates=wide=0.1,wide=0.2");
        CommandRun both = run("--rates=wide=7,tall=0.1");
        assertEquals(2, both.status());
        assertEquals(2, both.err().size());
    }

    @Test
    void refusesArgumentsOutOfRange() {
        String help = " See tallyward rehearse --help.";
        assertRefused(
                "Invalid value for option '--runs': 0 (expected: whole number from 1 to 10000000)." + help, "--runs=0");
        assertRefused(
                "Invalid value for option '--threads': none (expected: whole number from 1 to 256)." + help,
                "--threads=none");
        assertRefused(
                "Invalid value for option '--per-day': -1 (expected: whole number from 1 to 1000000000)." + help,
                "--per-day=-1");
        assertEquals(
                new CommandRun(2, List.of(), List.of("Missing required option: '--plan=FILE'." + help)),
                CommandRun.of("rehearse"));
    }

    @Test
    void refusesAPlanThatIsNone() {
        assertEquals(
                2,
                CommandRun.of(
                                "rehearse",
                                "--plan",
                                directory.resolve("none.yaml").toString())
                        .status());
    }

    private static List<String> arguments(Path plan, String... more) {
        List<String> arguments = new ArrayList<>(List.of("rehearse", "--plan", plan.toString()));
        arguments.addAll(List.of(more));
        return arguments;
    }

    private CommandRun run(String... more) {
        return CommandRun.of(arguments(plan, more).toArray(String[]::new));
    }

    private JsonNode json(String... more) {
        List<String> arguments = arguments(plan, more);
        arguments.add("--json");
        CommandRun run = CommandRun.of(arguments.toArray(String[]::new));
        assertEquals(0, run.status(), () -> run.toString());
        assertEquals(List.of(), run.err());
        assertEquals(1, run.out().size());
        return run.json().get(0);
    }

    private void assertRefused(String sentence, String... more) {
        assertEquals(new CommandRun(2, List.of(), List.of(sentence)), run(more));
    }
}
