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
import org.junit.jupiter.api.Test;
import org.junit.jupiter.api.io.TempDir;

/** Where a plan promises less than it seems to, that is said. */
class BoundariesRemarksTest {

    private static final double TOLERANCE = 1e-9;

    private static final String PLAN = """
            experiment: quay-banner
            question: does the wide quay photo bring more timetable clicks?
            owner: web-growth@northwater.example
            variants: {plain: {share: 0.5, control: true}, wide: {share: 0.5}}
            test: {alpha: 0.05, power: 0.8, baseline: 0.12, smallest-effect: 0.006}
            looks: {fractions: [0.2, 0.4, 0.6, 0.8, 1.0]}
            run: {from: 2026-05-04T00:00:00Z, at-most: P28D}
            """;

    private static final String FUTILITY = "futility: {predictive-power: 0.02}\n";

    @TempDir
    Path directory;

    /** By symmetry: without futility harm as large as the smallest effect is found with the power of the plan. */
    @Test
    void saysWhatBecomesOfHarm() throws IOException {
        JsonNode scenarios = json(PLAN).get("comparisons").get(0).get("scenarios");
        JsonNode worse = scenarios.get("asMuchWorse").get("futilityObeyed");
        assertEquals(0.8, worse.get("harm").asDouble(), TOLERANCE);
        assertEquals(0.114, scenarios.get("asMuchWorse").get("variantRate").asDouble(), TOLERANCE);
        assertEquals(List.of(), remarks(PLAN));
        assertFalse(json(PLAN.replace("power: 0.8", "sides: one, power: 0.8"))
                .get("comparisons")
                .get(0)
                .get("scenarios")
                .has("asMuchWorse"));

        JsonNode hidden =
                json(PLAN + FUTILITY).get("comparisons").get(0).get("scenarios").get("asMuchWorse");
        assertEquals(0.8, hidden.get("futilityOverruled").get("harm").asDouble(), TOLERANCE);
        double obeyed = hidden.get("futilityObeyed").get("harm").asDouble();
        assertTrue(obeyed < 0.1, "harm " + obeyed);
        assertEquals(
                1,
                remarks(PLAN + FUTILITY).stream()
                        .filter(remark -> remark.contains("is called harm in")
                                && remark.contains("with futility overruled, harm in 80.0 %"))
                        .count());
    }

    @Test
    void saysWhatIsTrueOfSeveralOnce() throws IOException {
        List<String> remarks =
                remarks(PLAN.replace("wide: {share: 0.5}", "wide: {share: 0.25}, tall: {share: 0.25}") + FUTILITY);
        assertEquals(2, remarks.size(), remarks.toString());
        assertTrue(remarks.get(0).startsWith("wide, tall: with futility obeyed the power is "), remarks.get(0));
        assertTrue(remarks.get(0).contains("futility.spending"), remarks.get(0));
        assertTrue(remarks.get(1).startsWith("wide, tall: with futility obeyed, a variant as much worse"));
    }

    @Test
    void saysThatViewsAreTakenForIndependent() throws IOException {
        List<String> remarks = remarks(PLAN + "count: {by: view}\n");
        assertEquals(1, remarks.size(), remarks.toString());
        assertTrue(remarks.get(0).startsWith("A trial is a view."), remarks.get(0));
        assertTrue(remarks.get(0).contains("multiply them by the design effect"), remarks.get(0));
    }

    /** Successes follow the information: 0.5 at 0.02, so 1.2 at 0.05, 4.8 at 0.2 and 9.6 at 0.4. */
    @Test
    void saysWhichLooksWait() throws IOException {
        List<String> remarks = remarks(
                PLAN.replace("baseline: 0.12, smallest-effect: 0.006", "baseline: 0.002, smallest-effect: 0.002")
                        .replace("[0.2,", "[0.02, 0.05, 0.2,"));
        assertTrue(
                remarks.get(0).endsWith("(test.minimum-per-cell); looks 1 to 3 are expected to wait for them."),
                remarks.get(0));
    }

    @Test
    void namesLooksThatCanStopNothing() throws IOException {
        List<String> remarks = remarks(PLAN.replace("fractions: [0.2, 0.4, 0.6, 0.8, 1.0]", "every: P1D"));
        assertEquals(1, remarks.size(), remarks.toString());
        assertTrue(
                remarks.get(0)
                        .matches("wide: the first \\d of the 28 looks could only stop on a difference of more than"
                                + " [12]\\.\\d\\d points; 14 looks would need .*"),
                remarks.get(0));
    }

    /** A plan needs what the comparison with the smallest share needs; parts add up to the whole. */
    @Test
    void needsWhatTheLargestComparisonNeeds() throws IOException {
        String uneven = PLAN.replace("wide: {share: 0.5}", "wide: {share: 0.3}, tall: {share: 0.2}");
        JsonNode root = json(uneven);
        JsonNode wide = root.get("comparisons").get(0);
        JsonNode tall = root.get("comparisons").get(1);
        assertEquals(
                tall.get("plannedTrials").asLong(), root.get("plannedTrials").asLong());
        assertTrue(
                wide.get("plannedTrials").asLong() < tall.get("plannedTrials").asLong());
        assertEquals(
                tall.get("trialsPerDay").asDouble(), root.get("trialsPerDay").asDouble());
        List<String> text =
                CommandRun.of("boundaries", "--plan", write(uneven).toString()).out();
        String trials = String.format("%,d", root.get("plannedTrials").asLong());
        assertTrue(text.get(2).startsWith("The plan needs " + trials + " trials of all variants"), text.get(2));
        assertTrue(String.join(" ", text).contains("Complete earlier: wide after "));
    }

    private List<String> remarks(String plan) throws IOException {
        List<String> sentences = new ArrayList<>();
        json(plan).get("remarks").forEach(sentence -> sentences.add(sentence.asText()));
        return sentences;
    }

    private JsonNode json(String plan) throws IOException {
        CommandRun run =
                CommandRun.of("boundaries", "--json", "--plan", write(plan).toString());
        assertEquals(0, run.status(), run::toString);
        return run.json().get(0);
    }

    private Path write(String plan) throws IOException {
        return Files.writeString(directory.resolve("quay.yaml"), plan);
    }
}
