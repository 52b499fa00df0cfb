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
 * Reference figures come from an independent recursion in Python (numpy, scipy), done again in R: five equal looks,
 * two-sided 0.05, Lan-DeMets spending of the O'Brien-Fleming type. Dunnett's values come from a numerical integral, agree
 * with those of a second one in R, and to two decimals with his tables of 1955 and 1964 (recalled). Sums by hand are said
 * to be such.
 */
class BoundariesFiguresTest {

    /** The reference agrees with itself to about 1e-13 and is printed with 13 digits or more. */
    private static final double TOLERANCE = 1e-9;

    private static final double[] UPPER = {
        4.87688494879076, 3.35701192157464, 2.68028006454499, 2.28981676771195, 2.03103204331006
    };
    private static final double[] BENEFIT_WITHOUT_EFFECT = {
        5.38871262905874e-07, 0.000393612885428279, 0.00341391155429814, 0.00840372703545877, 0.0127882096535519
    };
    private static final double[] BENEFIT_UNDER_EFFECT = {
        0.00015393485391969, 0.0588375288489782, 0.257500957078439, 0.288904439892245, 0.194603139326418
    };
    private static final double[] HARM_UNDER_EFFECT = {
        3.99356211704933e-10, 1.29722040605597e-07, 5.13914421347695e-07, 5.84670563893222e-07, 4.09730352579846e-07
    };

    /** With power 0.8: drift, that over the drift of a single look, squared, and the expected information. */
    private static final double DRIFT = 2.836001250142;

    private static final double INFLATION = 1.02471987889;
    private static final double SHARE_UNDER_EFFECT = 0.8037926633451;
    private static final double SHARE_WITHOUT_EFFECT = 0.9934341822858;

    private static final String PLAN = """
            experiment: quay-banner
            question: does the wide quay photo bring more timetable clicks?
            owner: web-growth@northwater.example
            variants: {plain: {share: 0.5, control: true}, wide: {share: 0.5}}
            test: {alpha: 0.05, power: 0.8, baseline: 0.12, smallest-effect: 0.006}
            looks: {fractions: [0.2, 0.4, 0.6, 0.8, 1.0]}
            run: {from: 2026-05-04T00:00:00Z, at-most: P28D}
            """;

    /** Half the pooled variance of rates 0.12 and 0.126, over the square of their difference: trials per drift squared. */
    private static final double TRIALS_PER_ARM = 2 * 0.123 * 0.877 / (0.006 * 0.006);

    @TempDir
    Path directory;

    @Test
    void saysHowLikelyItStopsWhen() throws IOException {
        JsonNode comparison = comparison(PLAN);
        assertEquals(DRIFT, comparison.get("drift").asDouble(), TOLERANCE);
        assertEquals(INFLATION, comparison.get("inflation").asDouble(), TOLERANCE);
        double benefit = 0;
        double found = 0;
        double harm = 0;
        for (int k = 0; k < 5; k++) {
            JsonNode by = comparison.get("looks").get(k).get("stoppedBy");
            benefit += BENEFIT_WITHOUT_EFFECT[k];
            found += BENEFIT_UNDER_EFFECT[k];
            harm += HARM_UNDER_EFFECT[k];
            assertEquals(benefit, by.get("withoutEffect").get("benefit").asDouble(), TOLERANCE);
            assertEquals(benefit, by.get("withoutEffect").get("harm").asDouble(), TOLERANCE);
            assertEquals(found, by.get("smallestEffect").get("benefit").asDouble(), TOLERANCE);
            assertEquals(harm, by.get("smallestEffect").get("harm").asDouble(), TOLERANCE);
            assertEquals(0, by.get("smallestEffect").get("futility").asDouble());
        }
        JsonNode without = comparison.get("scenarios").get("withoutEffect").get("futilityObeyed");
        JsonNode effect = comparison.get("scenarios").get("smallestEffect").get("futilityObeyed");
        assertEquals(
                SHARE_WITHOUT_EFFECT, without.get("expectedInformationFraction").asDouble(), TOLERANCE);
        assertEquals(
                SHARE_UNDER_EFFECT, effect.get("expectedInformationFraction").asDouble(), TOLERANCE);
        assertEquals(
                5 * SHARE_UNDER_EFFECT, effect.get("expectedLooks").asDouble(), TOLERANCE, "looks are equal steps");
        assertEquals(0.8, effect.get("benefit").asDouble(), TOLERANCE);
    }

    /** By hand from the reference drift: 2 p (1 - p) drift^2 / difference^2 trials per variant. */
    @Test
    void countsTrialsAndDifferences() throws IOException {
        JsonNode comparison = comparison(PLAN);
        double arm = TRIALS_PER_ARM * DRIFT * DRIFT;
        assertEquals(Math.ceil(2 * arm), comparison.get("plannedTrials").asDouble());
        assertEquals(2 * arm / 28, comparison.get("trialsPerDay").asDouble(), 1e-6);
        assertEquals(
                Math.ceil(arm / INFLATION),
                comparison.get("singleLook").get("trialsPerVariant").get("wide").asDouble());
        for (int k = 0; k < 5; k++) {
            JsonNode look = comparison.get("looks").get(k);
            double fraction = (k + 1) / 5.0;
            assertEquals(
                    Math.ceil(2 * arm * fraction), look.get("plannedTrials").asDouble(), 1);
            double difference = UPPER[k] * 0.006 / DRIFT / Math.sqrt(fraction);
            assertEquals(difference, look.get("benefitDifference").asDouble(), TOLERANCE);
            assertEquals(-difference, look.get("harmDifference").asDouble(), TOLERANCE);
            assertTrue(look.get("futilityDifference").isNull());
            assertTrue(look.get("plannedTime").isNull(), "looks by fractions have no planned time");
        }
        assertEquals(
                0.025,
                json(PLAN.replace("[0.2, 0.4, 0.6, 0.8, 1.0]", "[1.0]"))
                        .get("comparisons")
                        .get(0)
                        .get("looks")
                        .get(0)
                        .get("upperPValue")
                        .asDouble(),
                TOLERANCE);
    }

    @Test
    void plansMomentsOfRegularLooks() throws IOException {
        JsonNode looks = comparison(PLAN.replace("fractions: [0.2, 0.4, 0.6, 0.8, 1.0]", "every: P9D"))
                .get("looks");
        List<String> times = new ArrayList<>();
        looks.forEach(look -> times.add(look.get("plannedTime").asText()));
        assertEquals(
                List.of("2026-05-13T00:00:00Z", "2026-05-22T00:00:00Z", "2026-05-31T00:00:00Z", "2026-06-01T00:00:00Z"),
                times,
                "the last look is at the end of the run");
    }

    /**
     * At rates with twice the difference the drift doubles. Trials follow the variance of the rates, 2 p (1 - p), unless
     * they themselves measure the information; then the drift does.
     */
    @Test
    void followsGivenRates() throws IOException {
        JsonNode observed = json(PLAN, "--rates", "plain=0.12,wide=0.132")
                .get("comparisons")
                .get(0);
        JsonNode rates = observed.get("scenarios").get("rates");
        assertEquals(2 * DRIFT, rates.get("drift").asDouble(), TOLERANCE);
        double share =
                rates.get("futilityObeyed").get("expectedInformationFraction").asDouble();
        assertEquals(
                2 * TRIALS_PER_ARM * DRIFT * DRIFT * (0.126 * 0.874) / (0.123 * 0.877) * share,
                rates.get("futilityObeyed").get("expectedTrials").asDouble(),
                1e-3);

        JsonNode trials = json(PLAN.replace("power: 0.8", "power: 0.8, information: trials"), "--rates", "wide=0.132")
                .get("comparisons")
                .get(0);
        JsonNode counted = trials.get("scenarios").get("rates");
        assertEquals(
                2 * DRIFT * Math.sqrt(0.123 * 0.877 / (0.126 * 0.874)),
                counted.get("drift").asDouble(),
                TOLERANCE);
        assertEquals(
                2
                        * TRIALS_PER_ARM
                        * DRIFT
                        * DRIFT
                        * counted.get("futilityObeyed")
                                .get("expectedInformationFraction")
                                .asDouble(),
                counted.get("futilityObeyed").get("expectedTrials").asDouble(),
                1e-3);
        assertEquals(
                -2 * DRIFT,
                json(PLAN + "better: lower\n", "--rates", "wide=0.132")
                        .get("comparisons")
                        .get(0)
                        .get("scenarios")
                        .get("rates")
                        .get("drift")
                        .asDouble(),
                0.02,
                "what is higher is worse there; the planned variance is that of 0.114");
    }

    @Test
    void saysWhatIsWrongWithRates() throws IOException {
        CommandRun run = CommandRun.of("boundaries", "--plan", write(PLAN).toString(), "--rates", "wade=0.13,plain=2");
        assertEquals(2, run.status());
        assertEquals(2, run.err().size(), run.err().toString());
        assertTrue(run.err().get(0).contains("unknown variant wade"), run.err().get(0));
        assertTrue(run.err().get(1).contains("plain=2"), run.err().get(1));
    }

    /** Rates so far apart that z would be beyond 25 at the end: with futility there is no answer, and no wrong one. */
    @Test
    void refusesRatesThatLieTooFarApart() throws IOException {
        String two = PlannedPathTest.PLAN.replace("sides: one", "sides: two");
        CommandRun run = CommandRun.of("boundaries", "--plan", write(two).toString(), "--rates", "chip=0.5");
        assertEquals(2, run.status());
        assertEquals(1, run.err().size(), run.err().toString());
        assertTrue(
                run.err().get(0).contains("Choose rates that lie closer together"),
                run.err().get(0));
        JsonNode certain = json(PLAN, "--rates", "wide=0.5")
                .get("comparisons")
                .get(0)
                .get("scenarios")
                .get("rates");
        assertEquals(1, certain.get("futilityObeyed").get("benefit").asDouble(), TOLERANCE);
    }

    /** By hand: half of 0.06 and of 0.02 each; both shares pass on when the other challenger is found. */
    @Test
    void showsDirectionsAndHowLevelsArePassedOn() throws IOException {
        String two = PLAN.replace("wide: {share: 0.5}", "wide: {share: 0.25}, tall: {share: 0.25}")
                .replace(
                        "alpha: 0.05,",
                        "alpha: 0.08, clock: calendar, information: trials, harm: {alpha: 0.06, spending: pocock, silent-before: 0.3},");
        JsonNode comparison = comparison(two);
        JsonNode directions = comparison.get("directions");
        assertEquals(0.01, directions.get("benefit").get("level").asDouble(), 1e-15);
        assertEquals("obrien-fleming", directions.get("benefit").get("spending").asText());
        assertEquals(0.03, directions.get("harm").get("level").asDouble(), 1e-15);
        assertEquals("pocock", directions.get("harm").get("spending").asText());
        assertEquals(0.3, directions.get("harm").get("silentBefore").asDouble());
        assertEquals("calendar", comparison.get("clock").asText());
        assertEquals("trials", comparison.get("informationMeasure").asText());
        assertEquals("pass-on", comparison.get("alphaSharing").asText());
        assertEquals(1, comparison.get("levelsAfterOthers").size());
        JsonNode after = comparison.get("levelsAfterOthers").get(0);
        assertEquals(1, after.get("found").asInt());
        assertEquals(0.02, after.get("benefit").asDouble(), 1e-15);
        assertEquals(0.06, after.get("harm").asDouble(), 1e-15);
        JsonNode first = comparison.get("looks").get(0);
        assertTrue(first.get("lower").isNull(), "harm spends nothing at 0.2");
        assertEquals(0, first.get("alphaSpentHarm").asDouble());
        assertEquals(
                first.get("alphaSpent").asDouble(),
                first.get("alphaSpentBenefit").asDouble());

        JsonNode split = comparison(two.replace("clock: calendar", "alpha-sharing: split"));
        assertEquals("split", split.get("alphaSharing").asText());
        assertEquals(0.01, split.get("levelsAfterOthers").get(0).get("benefit").asDouble(), 1e-15);
    }

    @Test
    void refersToDunnett() throws IOException {
        String equal = PLAN.replace(
                "{plain: {share: 0.5, control: true}, wide: {share: 0.5}}",
                "{plain: {share: 0.25, control: true}, wide: {share: 0.25}, tall: {share: 0.25}, dusk: {share: 0.25}}");
        JsonNode both = comparison(equal).get("dunnett");
        assertEquals("two", both.get("sides").asText());
        assertEquals(2.348970590339, both.get("criticalValue").asDouble(), TOLERANCE);
        assertEquals(2.393979799819, both.get("evenSplit").asDouble(), TOLERANCE);
        JsonNode one = comparison(equal.replace("alpha: 0.05", "alpha: 0.025, sides: one"))
                .get("dunnett");
        assertEquals("one", one.get("sides").asText());
        assertEquals(2.348976102583, one.get("criticalValue").asDouble(), TOLERANCE);
        assertTrue(comparison(PLAN).get("dunnett").isNull(), "there is nothing to share with a single challenger");
    }

    /** The reference power with futility obeyed is the planned one; a rule that looks ahead costs some, and that is said. */
    @Test
    void warnsOfFewSuccessesAndOfLostPower() throws IOException {
        assertEquals(List.of(), remarks(PLAN));
        assertEquals(List.of(), remarks(PlannedPathTest.PLAN));
        List<String> rare = remarks(
                PLAN.replace("baseline: 0.12, smallest-effect: 0.006", "baseline: 0.002, smallest-effect: 0.002")
                        .replace("[0.2,", "[0.05,"));
        assertEquals(2, rare.size(), rare.toString());
        assertTrue(
                rare.get(0).startsWith("At the first look plain is expected to have 1.2 successes and 600.2"),
                rare.get(0));
        assertTrue(rare.get(1).startsWith("At the first look wide is expected to have 2.4 successes"), rare.get(1));
        JsonNode cell = comparison(PLAN).get("firstLook").get("plain");
        assertEquals(
                TRIALS_PER_ARM * DRIFT * DRIFT / 5 * 0.12, cell.get("successes").asDouble(), 1e-4);
        assertEquals(
                TRIALS_PER_ARM * DRIFT * DRIFT / 5 * 0.88, cell.get("failures").asDouble(), 1e-3);

        String eager = PLAN + "futility: {conditional-power: 0.2, under: trend}\n";
        JsonNode effect = comparison(eager).get("scenarios").get("smallestEffect");
        assertEquals(0.8, effect.get("futilityOverruled").get("benefit").asDouble(), TOLERANCE);
        double power = effect.get("futilityObeyed").get("benefit").asDouble();
        assertTrue(power < 0.75, "power " + power);
        assertEquals(2, remarks(eager).size());
        assertTrue(
                remarks(eager).get(0).contains("with futility obeyed the power is 0."),
                remarks(eager).get(0));
    }

    private List<String> remarks(String plan) throws IOException {
        List<String> sentences = new ArrayList<>();
        json(plan).get("remarks").forEach(sentence -> sentences.add(sentence.asText()));
        return sentences;
    }

    private JsonNode comparison(String plan) throws IOException {
        return json(plan).get("comparisons").get(0);
    }

    private JsonNode json(String plan, String... more) throws IOException {
        List<String> arguments = new ArrayList<>(
                List.of("boundaries", "--json", "--plan", write(plan).toString()));
        arguments.addAll(List.of(more));
        CommandRun run = CommandRun.of(arguments.toArray(String[]::new));
        assertEquals(List.of(), run.err());
        assertEquals(0, run.status(), () -> run.out().toString());
        return run.json().get(0);
    }

    private Path write(String plan) throws IOException {
        return Files.writeString(directory.resolve("quay.yaml"), plan);
    }
}
