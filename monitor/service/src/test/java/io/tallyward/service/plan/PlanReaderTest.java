package io.tallyward.service.plan;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertNotEquals;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.engine.plan.AllocationEpoch;
import io.tallyward.engine.plan.CountRule;
import io.tallyward.engine.plan.CountRule.CountBy;
import io.tallyward.engine.plan.FutilityPlan;
import io.tallyward.engine.plan.FutilityPlan.Assumption;
import io.tallyward.engine.plan.LookSchedule;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.PlanDigest;
import io.tallyward.engine.plan.Run;
import io.tallyward.engine.plan.Spending;
import io.tallyward.engine.plan.Spending.Family;
import io.tallyward.engine.plan.SplitCheckPlan;
import io.tallyward.engine.plan.Tail;
import io.tallyward.engine.plan.TestPlan;
import io.tallyward.engine.plan.TestPlan.AlphaSharing;
import io.tallyward.engine.plan.TestPlan.Better;
import io.tallyward.engine.plan.TestPlan.InformationMeasure;
import io.tallyward.engine.plan.TestPlan.Sides;
import io.tallyward.engine.plan.TestPlan.SpendingClock;
import io.tallyward.engine.plan.TrustLimits;
import io.tallyward.engine.plan.Variant;
import io.tallyward.service.config.document.Problem;
import java.time.Duration;
import java.time.Instant;
import java.util.LinkedHashMap;
import java.util.List;
import java.util.Map;
import java.util.Optional;
import java.util.TreeMap;
import org.junit.jupiter.api.Test;

class PlanReaderTest {

    static final String MINIMAL = """
            experiment: quay-banner
            question: does the wide quay photo bring more timetable clicks?
            owner: web-growth@northwater.example
            variants: {plain: {share: 0.5, control: true}, wide: {share: 0.5}}
            test: {alpha: 0.05, baseline: 0.12, smallest-effect: 0.006}
            looks: {every: PT6H}
            run: {from: 2026-05-04T00:00:00Z, at-most: P28D}
            """;

    @Test
    void fillsInDefaults() throws Exception {
        assertEquals(
                new Plan(
                        "quay-banner",
                        "does the wide quay photo bring more timetable clicks?",
                        "web-growth@northwater.example",
                        new CountRule(
                                CountBy.UNIT, Duration.ofMinutes(30), Duration.ofMinutes(10), Duration.ofMinutes(5)),
                        List.of(new Variant("plain", 0.5, true), new Variant("wide", 0.5, false)),
                        TestPlan.of(0.05, Sides.TWO, Spending.of(Family.OBRIEN_FLEMING), 0.8, 0.12, 0.006),
                        new LookSchedule.Every(Duration.ofHours(6)),
                        Optional.empty(),
                        new SplitCheckPlan(0.001),
                        TrustLimits.DEFAULT,
                        new Run(Instant.parse("2026-05-04T00:00:00Z"), Duration.ZERO, Duration.ofDays(28)),
                        List.of()),
                PlanReader.parse("quay.yaml", MINIMAL).orElseThrow());
    }

    @Test
    void readsEveryKey() throws Exception {
        Plan plan = PlanReader.parse("deck.yaml", """
                        experiment: deck-map
                        question: which deck map helps?
                        owner: web-growth@northwater.example
                        better: lower
                        count: {by: unit, attribution: PT1H, grace: PT5M, window: PT15M}
                        variants:
                          flat: {share: 0.8, control: true}
                          tilted: {share: 0.1, control: false}
                          round: {share: 0.1}
                        test:
                          alpha: 0.04
                          sides: one
                          power: 0.9
                          baseline: 0.3
                          smallest-effect: {relative: 0.05}
                          spending: {hwang-shih-decani: -2}
                          benefit: {silent-before: 0.25}
                          alpha-sharing: split
                          clock: calendar
                          information: trials
                          minimum-per-cell: 20
                        looks: {fractions: [0.25, 0.5, 0.75, 1.0]}
                        futility: {spending: {kim-demets: 3}}
                        split-check: {alpha: 0.01, segments: [version, platform]}
                        trust: {crossover-share: 0.05, late-share: 0.01, starved-after: PT2H}
                        run: {from: 2026-05-04T00:00:00+02:00, at-least: P7D, at-most: P14D}
                        epochs:
                          - from: 2026-05-06T00:00:00Z
                            shares: {flat: 0.34, tilted: 0.33, round: 0.33}
                        """).orElseThrow();

        assertEquals(
                List.of("flat", "tilted", "round"),
                plan.variants().stream().map(Variant::name).toList());
        assertEquals(
                new TestPlan(
                        new Tail(0.04, new Spending(Family.HWANG_SHIH_DECANI, -2), 0.25),
                        Optional.empty(),
                        AlphaSharing.SPLIT,
                        SpendingClock.CALENDAR,
                        InformationMeasure.TRIALS,
                        0.9,
                        0.3,
                        0.015,
                        Better.LOWER,
                        20),
                plan.test());
        assertEquals(new LookSchedule.AtFractions(List.of(0.25, 0.5, 0.75, 1.0)), plan.looks());
        assertEquals(Optional.of(new FutilityPlan.ErrorSpending(new Spending(Family.KIM_DEMETS, 3))), plan.futility());
        assertEquals(new SplitCheckPlan(0.01, List.of("platform", "version")), plan.splitCheck());
        assertEquals(new TrustLimits(0.05, 0.01, 0.05, Duration.ofHours(2)), plan.trust());
        assertEquals(
                new Run(Instant.parse("2026-05-03T22:00:00Z"), Duration.ofDays(7), Duration.ofDays(14)), plan.run());
        assertEquals(
                List.of(new AllocationEpoch(
                        Instant.parse("2026-05-06T00:00:00Z"), Map.of("flat", 0.34, "tilted", 0.33, "round", 0.33))),
                plan.epochs());
    }

    @Test
    void dividesAlphaBetweenTheDirections() throws Exception {
        TestPlan harmLess = test("alpha: 0.05, harm: {alpha: 0.01, spending: pocock}");
        assertEquals(new Tail(0.04, Spending.of(Family.OBRIEN_FLEMING), 0), harmLess.benefit());
        assertEquals(Optional.of(new Tail(0.01, Spending.of(Family.POCOCK), 0)), harmLess.harm());
        TestPlan both = test("alpha: 0.05, benefit: {alpha: 0.02}, harm: {alpha: 0.03, silent-before: 0.5}");
        assertEquals(new Tail(0.02, Spending.of(Family.OBRIEN_FLEMING), 0), both.benefit());
        assertEquals(Optional.of(new Tail(0.03, Spending.of(Family.OBRIEN_FLEMING), 0.5)), both.harm());
        TestPlan neither = test("alpha: 0.05, harm: {spending: pocock}");
        assertEquals(0.025, neither.benefit().alpha(), 0);
        assertEquals(0.025, neither.harm().orElseThrow().alpha(), 0);
    }

    @Test
    void refusesSegmentsThatAreNoFieldsTooManyOrTheSame() {
        assertEquals(
                List.of(
                        "bad.yaml:8: split-check.segments[0]: app version (expected: a field name of at most 64 letters,"
                                + " digits, dots, hyphens and underscores)"),
                problems(MINIMAL + "split-check: {segments: [app version, platform]}\n"));
        assertEquals(
                List.of("bad.yaml:8: split-check.segments: a list of 5 (expected: a list of 1 to 4 fields)"),
                problems(MINIMAL + "split-check: {segments: [a, b, c, d, e]}\n"));
        assertEquals(
                List.of("bad.yaml:8: split-check.segments: a, b, a (expected: different fields)"),
                problems(MINIMAL + "split-check: {segments: [a, b, a]}\n"));
    }

    @Test
    void takesSegmentsInAnyOrderForTheSamePlan() throws Exception {
        Plan plan = PlanReader.parse("a.yaml", MINIMAL + "split-check: {segments: [platform, version]}\n")
                .orElseThrow();
        Plan other = PlanReader.parse("b.yaml", MINIMAL + "split-check: {segments: [version, platform]}\n")
                .orElseThrow();
        Plan less = PlanReader.parse("c.yaml", MINIMAL + "split-check: {segments: [version]}\n")
                .orElseThrow();
        assertEquals(PlanDigest.of(plan), PlanDigest.of(other));
        assertNotEquals(PlanDigest.of(plan), PlanDigest.of(less));
        assertNotEquals(
                PlanDigest.of(less),
                PlanDigest.of(PlanReader.parse("d.yaml", MINIMAL).orElseThrow()));
    }

    private static TestPlan test(String start) throws Exception {
        return PlanReader.parse("quay.yaml", MINIMAL.replace("alpha: 0.05", start))
                .orElseThrow()
                .test();
    }

    @Test
    void readsASpendingTable() throws Exception {
        assertEquals(
                Spending.table(new TreeMap<>(Map.of(0.25, 0.1, 0.5, 0.1, 1.0, 1.0))),
                test("alpha: 0.05, spending: {table: {0.25: 0.1, 0.5: 0.1, 1: 1}}")
                        .benefit()
                        .spending());
    }

    @Test
    void readsEveryFutilityRule() throws Exception {
        assertEquals(new FutilityPlan.ConditionalPower(0.2, Assumption.DESIGN), futility("{conditional-power: 0.2}"));
        assertEquals(
                new FutilityPlan.ConditionalPower(0.2, Assumption.TREND),
                futility("{conditional-power: 0.2, under: trend}"));
        assertEquals(new FutilityPlan.PredictivePower(0.1), futility("{predictive-power: 0.1}"));
    }

    private static FutilityPlan futility(String rule) throws Exception {
        return PlanReader.parse("quay.yaml", MINIMAL + "futility: " + rule + "\n")
                .orElseThrow()
                .futility()
                .orElseThrow();
    }

    /** What the design refuses is refused with the plan, before anything is counted under it. */
    @Test
    void refusesAPlanThatHasNoDesign() {
        String tiny = problems(MINIMAL.replace("smallest-effect: 0.006", "smallest-effect: 1e-9"))
                .get(0);
        assertTrue(tiny.startsWith("bad.yaml:5: test: a test of wide that cannot be designed, "), tiny);
        String close = problems(MINIMAL.replace("{every: PT6H}", "{fractions: [0.5, 0.5000001, 1]}"))
                .get(0);
        assertTrue(close.startsWith("bad.yaml:6: looks.fractions: "), close);
    }

    @Test
    void refusesDirectionsAndRulesThatDoNotFit() {
        Map<String, String> refusals = new LinkedHashMap<>();
        refusals.put(
                "alpha: 0.05, benefit: {alpha: 0.02}, harm: {alpha: 0.02}",
                "test.alpha: benefit.alpha + harm.alpha = 0.04 (expected: both to add up to test.alpha, 0.05)");
        refusals.put(
                "alpha: 0.05, harm: {alpha: 0.05}",
                "test.harm.alpha: 0.05 (expected: less than test.alpha, 0.05, so that the other direction has some left)");
        refusals.put(
                "alpha: 0.05, sides: one, harm: {spending: pocock}",
                "test.harm: a direction (expected: nothing: with sides: one only a benefit is tested)");
        refusals.put(
                "alpha: 0.05, sides: one, benefit: {alpha: 0.01}",
                "test.benefit.alpha: a level (expected: nothing: with sides: one it has all of test.alpha)");
        refusals.put(
                "alpha: 0.05, spending: {table: {0.5: 0.6, 0.8: 0.5, 1: 1}}",
                "test.spending.table: shares [0.6, 0.5, 1.0] "
                        + "(expected: shares of the level that never fall, the last point 1: 1)");
        refusals.forEach((start, problem) -> assertEquals(
                List.of("bad.yaml:5: " + problem), problems(MINIMAL.replace("alpha: 0.05", start)), start));
        assertEquals(
                List.of("bad.yaml:8: futility: no rule (expected: one of spending, conditional-power and"
                        + " predictive-power)"),
                problems(MINIMAL + "futility: {}\n"));
        assertEquals(
                List.of(
                        "bad.yaml:8: futility.under: none (expected: nothing: only conditional-power assumes an effect)"),
                problems(MINIMAL + "futility: {predictive-power: 0.1, under: none}\n"));
    }

    @Test
    void countsViewsWhereAsked() throws Exception {
        Plan units = PlanReader.parse("plan.yaml", MINIMAL).orElseThrow();
        Plan views =
                PlanReader.parse("plan.yaml", MINIMAL + "count: {by: view}\n").orElseThrow();
        assertEquals(CountBy.UNIT, units.count().by());
        assertEquals(CountBy.VIEW, views.count().by());
        assertEquals(units.count().attribution(), views.count().attribution());
        assertNotEquals(PlanDigest.of(units), PlanDigest.of(views));
        assertEquals(
                List.of("bad.yaml:5: test.information: trials (expected: observed, as count.by is view)."
                        + " Views of a unit are not independent, so their number does not say how much is known."),
                problems(MINIMAL.replace("test: {", "test: {information: trials, ") + "count: {by: view}\n"));
    }

    @Test
    void reportsAllProblemsTogether() {
        assertEquals(
                List.of(
                        "bad.yaml:1: experiment: Quay Banner "
                                + "(expected: a name of at most 64 lower-case letters, digits and hyphens)",
                        "bad.yaml:1: owner: missing (expected: text of at most 200 characters)",
                        "bad.yaml:3: count.by: visit (expected: unit or view)",
                        "bad.yaml:3: count.window: PT7M (expected: a duration that divides a day)",
                        "bad.yaml:4: variants: no control (expected: exactly one variant with control: true)",
                        "bad.yaml:4: variants: shares that add up to 0.9 (expected: shares that add up to 1)",
                        "bad.yaml:5: test.alpha: 0.7 (expected: number from 1e-9 to below 0.5)",
                        "bad.yaml:5: test.sides: both (expected: one or two)",
                        "bad.yaml:5: test.spending: fleming (expected: obrien-fleming, pocock, "
                                + "{hwang-shih-decani: GAMMA}, {kim-demets: RHO} or {table: {FRACTION: SHARE, ..., 1: 1}})",
                        "bad.yaml:5: test.smallest-effect: 0.4 "
                                + "(expected: a number that leaves baseline + smallest-effect below 1)",
                        "bad.yaml:6: looks: both are given (expected: either every or fractions)",
                        "bad.yaml:6: looks.fractions: [0.5, 0.25] (expected: fractions that ascend by 0.001 or more, the last one 1)",
                        "bad.yaml:7: run.at-least: P8D (expected: at most run.at-most, P7D)"),
                problems("""
                        experiment: Quay Banner
                        question: does it?
                        count: {by: visit, window: PT7M}
                        variants: {plain: {share: 0.5}, wide: {share: 0.4}}
                        test: {alpha: 0.7, sides: both, baseline: 0.7, smallest-effect: 0.4, spending: fleming}
                        looks: {every: PT6H, fractions: [0.5, 0.25]}
                        run: {from: 2026-05-04T00:00:00Z, at-least: P8D, at-most: P7D}
                        """));
    }

    @Test
    void keepsTheRunOnTheGridOfWindows() {
        assertEquals(
                List.of(
                        "bad.yaml:6: looks.every: PT7M (expected: a multiple of count.window, PT5M)",
                        "bad.yaml:7: run.from: 2026-05-04T00:01:00Z "
                                + "(expected: a moment at the start of a window of PT5M)",
                        "bad.yaml:7: run.at-most: PT28M (expected: a multiple of count.window, PT5M)"),
                problems(MINIMAL.replace("PT6H", "PT7M")
                        .replace("00:00:00Z", "00:01:00Z")
                        .replace("P28D", "PT28M")));
    }

    @Test
    void boundsTheWindowsThatAreOpenAtOnce() {
        String counting = "count: {attribution: P7D, grace: P1D, window: ";
        assertEquals(
                List.of("bad.yaml:8: count.window: PT1M (expected: at most 5000 windows in attribution and grace, P8D)."
                        + " Choose a wider window."),
                problems(MINIMAL + counting + "PT1M}\n"));
        assertEquals(List.of(), problems(MINIMAL + counting + "PT5M}\n"));
    }

    @Test
    void boundsTheNumberOfLooks() {
        assertEquals(
                List.of("bad.yaml:6: looks.every: PT5M (expected: at most 1000 looks in run.at-most, P28D). "
                        + "Choose a longer interval."),
                problems(MINIMAL.replace("PT6H", "PT5M")));
        assertEquals(
                List.of("bad.yaml:6: looks.every: PT10M (expected: at most 1000 looks in run.at-most, PT166H45M). "
                        + "Choose a longer interval."),
                problems(MINIMAL.replace("PT6H", "PT10M").replace("P28D", "PT10005M")),
                "the end of the run is look 1,001");
        assertEquals(
                List.of("bad.yaml:6: looks.every: P29D (expected: at most run.at-most, P28D)"),
                problems(MINIMAL.replace("PT6H", "P29D")));
    }

    @Test
    void keepsTheRatesBetweenZeroAndOne() {
        String lower = MINIMAL + "better: lower\n";
        assertEquals(List.of(), problems(lower));
        assertEquals(
                List.of("bad.yaml:5: test.smallest-effect: 0.12 (expected: less than the baseline)"),
                problems(lower.replace("0.006", "0.12")));
        assertEquals(List.of(), problems(MINIMAL.replace("0.006", "0.12")));
    }

    @Test
    void checksPlannedChangesOfTheSplit() {
        assertEquals(
                List.of(
                        "bad.yaml:9: epochs[0].from: 2026-05-04T00:00:00Z "
                                + "(expected: after 2026-05-04T00:00:00Z, where the epoch before starts)",
                        "bad.yaml:10: epochs[1].shares: shares of plain, tall "
                                + "(expected: the share of every variant: plain, wide)",
                        "bad.yaml:11: epochs[2].from: 2026-05-05T00:02:00Z "
                                + "(expected: a moment at the start of a window of PT5M)",
                        "bad.yaml:11: epochs[2].from: 2026-05-05T00:02:00Z "
                                + "(expected: after 2026-05-06T00:00:00Z, where the epoch before starts)",
                        "bad.yaml:11: epochs[2].shares: shares that add up to 1.1 (expected: shares that add up to 1)",
                        "bad.yaml:12: epochs[3].from: 2026-06-01T00:00:00Z "
                                + "(expected: before the end of the run, 2026-06-01T00:00:00Z)"),
                problems(MINIMAL + """
                        epochs:
                          - {from: 2026-05-04T00:00:00Z, shares: {plain: 0.5, wide: 0.5}}
                          - {from: 2026-05-06T00:00:00Z, shares: {plain: 0.5, tall: 0.5}}
                          - {from: 2026-05-05T00:02:00Z, shares: {plain: 0.5, wide: 0.6}}
                          - {from: 2026-06-01T00:00:00Z, shares: {plain: 0.5, wide: 0.5}}
                        """));
    }

    @Test
    void saysWhereAMisplacedKeyBelongs() {
        assertEquals(
                List.of(
                        "bad.yaml:5: test.better: unknown key (expected: alpha, sides, power, baseline, "
                                + "smallest-effect, spending, benefit, harm, alpha-sharing, clock, information, minimum-per-cell). Did you mean better?"),
                problems(MINIMAL.replace("{alpha: 0.05", "{better: lower, alpha: 0.05")));
    }

    @Test
    void boundsTheVariants() {
        assertEquals(
                List.of("bad.yaml:4: variants: 1 variants (expected: a mapping of 2 to 10 variants)"),
                problems(MINIMAL.replace(
                                "{share: 0.5, control: true}, wide: {share: 0.5}", "{share: 0.5, control: true}")
                        .replace("0.5, control", "0.99999999999, control")));
    }

    @Test
    void asksForTheParameterOfAFamily() {
        assertEquals(
                List.of("bad.yaml:5: test.spending.kim-demets: 0 (expected: number above 0, at most 20)"),
                problems(MINIMAL.replace("0.006", "0.006, spending: {kim-demets: 0}")));
        assertEquals(
                List.of("bad.yaml:5: test.spending: kim-demets (expected: obrien-fleming, pocock, "
                        + "{hwang-shih-decani: GAMMA}, {kim-demets: RHO} or {table: {FRACTION: SHARE, ..., 1: 1}})"),
                problems(MINIMAL.replace("0.006", "0.006, spending: kim-demets")));
    }

    @Test
    void guessesWhichValueWasMeant() {
        assertEquals(
                List.of("bad.yaml:5: test.spending: obrien-flemming (expected: obrien-fleming, pocock, "
                        + "{hwang-shih-decani: GAMMA}, {kim-demets: RHO} or {table: {FRACTION: SHARE, ..., 1: 1}}). "
                        + "Did you mean obrien-fleming?"),
                problems(MINIMAL.replace("0.006", "0.006, spending: obrien-flemming")));
        assertEquals(
                List.of("bad.yaml:5: test.clock: calender (expected: information or calendar). Did you mean calendar?"),
                problems(MINIMAL.replace("0.006", "0.006, clock: calender")));
    }

    private static List<String> problems(String text) {
        return PlanReader.parse("bad.yaml", text).problems().stream()
                .map(Problem::message)
                .toList();
    }
}
