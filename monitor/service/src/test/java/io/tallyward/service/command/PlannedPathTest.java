package io.tallyward.service.command;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.engine.decide.PlanDesign;
import io.tallyward.engine.plan.Plan;
import io.tallyward.service.config.document.BadInputException;
import io.tallyward.service.plan.PlanReader;
import io.tallyward.statistics.distribution.Normal;
import org.junit.jupiter.api.Test;

/**
 * Reference bounds, exit probabilities and expected information come from an independent recursion in Python (numpy, scipy), done again in R:
 * five equal looks, one-sided 0.025, power 0.8, Lan-DeMets spending of the O'Brien-Fleming type for efficacy and
 * Hwang-Shih-DeCani's with -2 for futility.
 */
class PlannedPathTest {

    /** The reference agrees with itself to about 1e-13 and is printed with 13 digits. */
    private static final double TOLERANCE = 1e-9;

    static final double[] REFERENCE = {-0.8464984051951, -0.0272785205672, 0.6803369950741, 1.339500769497};

    /** Expected share of the planned information, which at equal looks is the share of the looks. */
    private static final double SHARE_WITHOUT_EFFECT = 0.5168973043423;

    private static final double SHARE = 0.7405122582638;

    static final String PLAN = """
            experiment: fare-chip
            question: does a fare chip bring more clicks?
            owner: web-growth@northwater.example
            variants: {bare: {share: 0.5, control: true}, chip: {share: 0.5}}
            test: {alpha: 0.025, sides: one, power: 0.8, baseline: 0.12, smallest-effect: 0.006}
            looks: {fractions: [0.2, 0.4, 0.6, 0.8, 1.0]}
            futility: {spending: {hwang-shih-decani: -2}}
            run: {from: 2026-05-04T00:00:00Z, at-most: P28D}
            """;

    /** Per look: stop for benefit and for futility without an effect, then with the smallest effect. */
    private static final double[][] REFERENCE_EXITS = {
        {5.388712629059e-07, 0.1986373815785, 0.0001828813548377, 0.01539584846418},
        {0.0003936124362586, 0.3114972223617, 0.0666607962995, 0.02296790698},
        {0.003410304089204, 0.2611664286755, 0.2776168425849, 0.03426409088589},
        {0.008272791181559, 0.1478630353846, 0.2913597955992, 0.0511160170258},
        {0.01066604792512, 0, 0.1641796841616, 0},
    };

    /** Drift of the reference, for power 0.8 with futility obeyed. */
    private static final double DRIFT = 2.936529401726;

    @Test
    void endsWhereTheReferenceEnds() throws BadInputException {
        PlannedPath path = path(PLAN);
        for (int k = 0; k < REFERENCE.length; k++) {
            assertEquals(REFERENCE[k], path.futility(k), TOLERANCE, "look " + (k + 1));
        }
        assertEquals(Double.NEGATIVE_INFINITY, path.futility(4), "the last look has no bound of its own");
        StopChances[] chances = path.obeyed(0, DRIFT);
        assertShares(chances);
        double[] sums = new double[4];
        for (int k = 0; k < REFERENCE_EXITS.length; k++) {
            for (int i = 0; i < sums.length; i++) {
                sums[i] += REFERENCE_EXITS[k][i];
            }
            String look = "look " + (k + 1);
            assertEquals(sums[0], chances[0].benefit()[k], TOLERANCE, look);
            assertEquals(sums[1], chances[0].futility()[k], TOLERANCE, look);
            assertEquals(sums[2], chances[1].benefit()[k], TOLERANCE, look);
            assertEquals(sums[3], chances[1].futility()[k], TOLERANCE, look);
            assertEquals(0, chances[0].harm()[k], "harm is not tested");
        }
        assertEquals(0.8, chances[1].power(), TOLERANCE);
    }

    @Test
    void isMirroredWhenLowerIsBetter() throws BadInputException {
        PlannedPath path = path(PLAN + "better: lower\n");
        for (int k = 0; k < REFERENCE.length; k++) {
            assertEquals(-REFERENCE[k], path.futility(k), TOLERANCE, "look " + (k + 1));
        }
        assertEquals(Double.POSITIVE_INFINITY, path.futility(4));
        assertEquals(Double.POSITIVE_INFINITY, path.harm(4));
        assertEquals(-2.031032043491, path.benefit(4), TOLERANCE);
        assertShares(path.obeyed(0, DRIFT));
    }

    /** Futility comes sooner than harm, and the drift towards the benefit is the same: hardly anything changes. */
    @Test
    void stopsForHarmBesideFutility() throws BadInputException {
        PlannedPath path = path(PLAN.replace("alpha: 0.025, sides: one", "alpha: 0.05, sides: two"));
        for (int k = 0; k < REFERENCE.length; k++) {
            assertEquals(REFERENCE[k], path.futility(k), TOLERANCE, "look " + (k + 1));
        }
        StopChances chances = path.obeyed(0)[0];
        assertEquals(5 * SHARE_WITHOUT_EFFECT, chances.expectedLooks(), TOLERANCE);
        assertEquals(
                REFERENCE_EXITS[0][0], chances.harm()[0], TOLERANCE, "harm and benefit are alike at the first look");
        assertEquals(REFERENCE_EXITS[0][1], chances.futility()[0] + chances.harm()[0], TOLERANCE);
    }

    /**
     * Two looks, the second one's harm by another way: the path crosses from every z between the bounds of the first look
     * to beyond that of the second, summed by Simpson's rule.
     */
    @Test
    void tellsHarmFromFutilityAfterTheFirstLook() {
        double[] information = {0.4, 0.7, 1};
        double[] benefit = {2.9, 2.4, 2};
        double[] harm = {-2.2, -1.6, -1.9};
        double[] futility = {-1.5, 0.3, Double.NEGATIVE_INFINITY};
        StopChances.Walk walk = new StopChances.Walk(information, benefit, harm, futility);
        for (double drift : new double[] {0, 2.5, -2.5}) {
            StopChances chances = walk.obeyed(drift)[0];
            double harmFirst = Normal.cdf(-2.2 - drift * Math.sqrt(0.4));
            assertEquals(harmFirst, chances.harm()[0], 1e-12, "drift " + drift);
            assertEquals(
                    Normal.cdf(-1.5 - drift * Math.sqrt(0.4)) - harmFirst,
                    chances.futility()[0],
                    1e-12,
                    "drift " + drift);
            double harmed = crossing(drift, -1.6) + harmFirst;
            assertEquals(harmed, chances.harm()[1], TOLERANCE, "drift " + drift);
            assertEquals(
                    crossing(drift, 0.3) - crossing(drift, -1.6) + chances.futility()[0],
                    chances.futility()[1],
                    TOLERANCE,
                    "drift " + drift);
            assertEquals(chances.futility()[1], chances.futility()[2], "the last look has no futility");
            assertTrue(
                    walk.overruled(drift)[0].harm()[2] > chances.harm()[2], "who overrules futility meets more harm");
        }
    }

    /** P(-1.5 < Z1 < 2.9 and Z2 < z) with information 0.4 and 0.7. */
    private static double crossing(double drift, double z) {
        int steps = 4_000;
        double width = (2.9 + 1.5) / steps;
        double sum = 0;
        for (int i = 0; i <= steps; i++) {
            double z1 = -1.5 + i * width;
            double weight = i == 0 || i == steps ? 1 : i % 2 == 1 ? 4 : 2;
            double ahead = z * Math.sqrt(0.7) - z1 * Math.sqrt(0.4) - drift * 0.3;
            sum += weight * Normal.density(z1 - drift * Math.sqrt(0.4)) * Normal.cdf(ahead / Math.sqrt(0.3));
        }
        return sum * width / 3;
    }

    @Test
    void hasNoBoundsWithoutFutility() throws BadInputException {
        PlannedPath path = path(PLAN.replace("futility: {spending: {hwang-shih-decani: -2}}\n", ""));
        assertEquals(Double.NEGATIVE_INFINITY, path.futility(0));
        assertTrue(path.obeyed(0)[0].expectedLooks() > 4.9, "a false alarm comes late if at all");
    }

    /** No benefit is declared in the first half of the run; futility is. */
    @Test
    void mayBeFutileBeforeABenefitIsOpen() throws BadInputException {
        PlannedPath path = path(PLAN.replace("fractions: [0.2, 0.4, 0.6, 0.8, 1.0]", "every: P7D")
                .replace("at-most: P28D", "at-least: P14D, at-most: P28D"));
        assertTrue(Double.isFinite(path.futility(0)), "look 1: " + path.futility(0));
        assertTrue(path.futility(0) < path.futility(1) && path.futility(1) < path.futility(2));
    }

    private static void assertShares(StopChances... chances) {
        assertEquals(5 * SHARE_WITHOUT_EFFECT, chances[0].expectedLooks(), TOLERANCE);
        assertEquals(SHARE_WITHOUT_EFFECT, chances[0].expectedInformation(), TOLERANCE);
        assertEquals(5 * SHARE, chances[1].expectedLooks(), TOLERANCE);
        assertEquals(SHARE, chances[1].expectedInformation(), TOLERANCE);
    }

    private static PlannedPath path(String text) throws BadInputException {
        Plan plan = PlanReader.parse("fare.yaml", text).orElseThrow();
        return new PlannedPath(plan, PlanDesign.of(plan, plan.challengers().get(0)));
    }
}
