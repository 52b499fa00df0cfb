package io.tallyward.service.command;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertTrue;

import com.fasterxml.jackson.databind.JsonNode;
import java.io.IOException;
import java.nio.file.Files;
import java.nio.file.Path;
import java.util.ArrayList;
import java.util.List;
import org.junit.jupiter.api.Test;
import org.junit.jupiter.api.io.TempDir;

/**
 * Reference boundaries come from an independent recursion over the Lan-DeMets spending of the O'Brien-Fleming type, done
 * in Python (numpy, scipy) and again in R, which agree to 13 digits; rounded to three decimals they are the 4.333, 2.963,
 * 2.359, 2.014 that textbooks print for four equal looks.
 */
class BoundariesCommandTest {

    private static final double[] REFERENCE = {4.33263364605161, 2.9631315976799, 2.35904428530095, 2.01409014393087};
    private static final double[] REFERENCE_SPENT = {1.4733616871739e-05, 0.00305064551597782, 0.0192986499070241, 0.05
    };
    private static final double[] ONE_SIDED = {4.33263364605161, 2.9631315976799, 2.35904428530116, 2.01409014403428};
    private static final double[] ONE_SIDED_SPENT = {
        7.36680843586949e-06, 0.00152532275798891, 0.00964932495351203, 0.025
    };

    /** The reference agrees with itself to about 1e-13; ours is asked for four digits less. */
    private static final double TOLERANCE = 1e-9;

    private static final String PLAN = """
            experiment: quay-banner
            question: does the wide quay photo bring more timetable clicks?
            owner: web-growth@northwater.example
            variants: {plain: {share: 0.5, control: true}, wide: {share: 0.5}}
            test: {alpha: 0.05, sides: two, power: 0.8, baseline: 0.12, smallest-effect: 0.006}
            looks: {fractions: [0.25, 0.5, 0.75, 1.0]}
            run: {from: 2026-05-04T00:00:00Z, at-most: P28D}
            """;

    @TempDir
    Path directory;

    @Test
    void printsReferenceBoundaries() throws IOException {
        JsonNode root = json(PLAN);
        assertEquals(List.of("experiment", "comparisons", "remarks", "plannedTrials", "trialsPerDay"), names(root));
        assertEquals("quay-banner", root.get("experiment").asText());
        assertEquals(1, root.get("comparisons").size());
        JsonNode comparison = root.get("comparisons").get(0);
        assertEquals(
                List.of(
                        "variant",
                        "alpha",
                        "sides",
                        "spending",
                        "looks",
                        "maximumInformation",
                        "trialsPerVariant",
                        "inflation"),
                names(comparison).subList(0, 8),
                "what was published first stays first");
        assertEquals("wide", comparison.get("variant").asText());
        assertEquals(0.05, comparison.get("alpha").asDouble());
        assertEquals("two", comparison.get("sides").asText());
        assertEquals("obrien-fleming", comparison.get("spending").asText());
        JsonNode looks = comparison.get("looks");
        assertEquals(4, looks.size());
        for (int k = 0; k < 4; k++) {
            JsonNode look = looks.get(k);
            assertEquals(
                    List.of("look", "informationFraction", "alphaSpent", "upper", "lower"),
                    names(look).subList(0, 5));
            assertEquals(k + 1, look.get("look").asInt());
            assertEquals((k + 1) / 4.0, look.get("informationFraction").asDouble());
            assertEquals(REFERENCE_SPENT[k], look.get("alphaSpent").asDouble(), TOLERANCE);
            assertEquals(REFERENCE[k], look.get("upper").asDouble(), TOLERANCE);
            assertEquals(-look.get("upper").asDouble(), look.get("lower").asDouble());
        }
        assertEquals(List.of("plain", "wide"), names(comparison.get("trialsPerVariant")));
        assertTrue(comparison.get("inflation").asDouble() > 1);
    }

    @Test
    void splitsAlphaOverChallengersAndLeavesHarmOut() throws IOException {
        JsonNode comparisons = json(PLAN.replace("sides: two", "sides: one")
                        .replace("wide: {share: 0.5}", "wide: {share: 0.25}, tall: {share: 0.25}"))
                .get("comparisons");
        assertEquals(2, comparisons.size());
        for (JsonNode comparison : comparisons) {
            assertEquals(0.025, comparison.get("alpha").asDouble());
            assertEquals("one", comparison.get("sides").asText());
            for (int k = 0; k < 4; k++) {
                JsonNode look = comparison.get("looks").get(k);
                assertEquals(ONE_SIDED_SPENT[k], look.get("alphaSpent").asDouble(), TOLERANCE);
                assertEquals(ONE_SIDED[k], look.get("upper").asDouble(), TOLERANCE);
                assertTrue(look.get("lower").isNull());
            }
        }
        assertEquals(List.of("plain", "tall"), names(comparisons.get(1).get("trialsPerVariant")));
    }

    @Test
    void looksDownwardsWhenLowerIsBetter() throws IOException {
        JsonNode look = json(PLAN.replace("sides: two", "sides: one").replace("0.05", "0.025") + "better: lower\n")
                .get("comparisons")
                .get(0)
                .get("looks")
                .get(3);
        assertTrue(look.get("upper").isNull());
        assertEquals(-ONE_SIDED[3], look.get("lower").asDouble(), TOLERANCE);
    }

    @Test
    void placesRegularLooksAtAnEvenPaceAndTheLastAtTheEnd() throws IOException {
        JsonNode looks = json(PLAN.replace("fractions: [0.25, 0.5, 0.75, 1.0]", "every: P9D"))
                .get("comparisons")
                .get(0)
                .get("looks");
        List<Double> fractions = new ArrayList<>();
        looks.forEach(look -> fractions.add(look.get("informationFraction").asDouble()));
        assertEquals(List.of(9.0 / 28, 18.0 / 28, 27.0 / 28, 1.0), fractions);
    }

    @Test
    void showsFutilityWhereThePlanHasIt() throws IOException {
        JsonNode looks = json(PlannedPathTest.PLAN).get("comparisons").get(0).get("looks");
        for (int k = 0; k < 4; k++) {
            assertEquals(
                    List.of("look", "informationFraction", "alphaSpent", "upper", "lower", "futility"),
                    names(looks.get(k)).subList(0, 6));
            assertEquals(
                    PlannedPathTest.REFERENCE[k], looks.get(k).get("futility").asDouble(), TOLERANCE);
        }
        assertTrue(looks.get(4).get("futility").isNull());
    }

    @Test
    void refusesABadPlan() throws IOException {
        Path file = write(PLAN.replace("0.05", "0.5").replace("P28D", "P28DT1M"));
        List<String> messages = List.of(
                file + ":5: test.alpha: 0.5 (expected: number from 1e-9 to below 0.5)",
                file + ":7: run.at-most: PT672H1M (expected: a multiple of count.window, PT5M)");
        CommandRun text = CommandRun.of("boundaries", "--plan", file.toString());
        assertEquals(new CommandRun(2, List.of(), messages), text);

        CommandRun json = CommandRun.of("boundaries", "--plan", file.toString(), "--json");
        assertEquals(2, json.status());
        assertEquals(List.of(), json.err());
        assertEquals(
                "{\"type\":\"problem\",\"where\":\"" + file + ":5\",\"key\":\"test.alpha\",\"found\":\"0.5\","
                        + "\"expected\":\"number from 1e-9 to below 0.5\",\"remedy\":\"\",\"message\":\""
                        + messages.get(0) + "\"}",
                json.out().get(0));
        assertEquals(2, json.out().size());
    }

    private JsonNode json(String plan) throws IOException {
        CommandRun run = CommandRun.of("boundaries", "--plan", write(plan).toString(), "--json");
        assertEquals(List.of(), run.err());
        assertEquals(0, run.status(), () -> run.out().toString());
        assertEquals(1, run.out().size());
        return run.json().get(0);
    }

    private Path write(String plan) throws IOException {
        return Files.writeString(directory.resolve("quay.yaml"), plan);
    }

    private static List<String> names(JsonNode node) {
        List<String> names = new ArrayList<>();
        node.fieldNames().forEachRemaining(names::add);
        return names;
    }
}
