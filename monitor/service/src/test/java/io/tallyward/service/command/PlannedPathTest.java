package io.tallyward.service.command;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.engine.decide.PlanDesign;
import io.tallyward.engine.plan.Plan;
import io.tallyward.service.config.document.BadInputException;
import io.tallyward.service.plan.PlanReader;
import org.junit.jupiter.api.Test;

/**
 * Reference bounds and expected information come from an independent recursion in Python (numpy, scipy), done again in R:
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

    @Test
    void endsWhereTheReferenceEnds() throws BadInputException {
        PlannedPath path = path(PLAN);
        for (int k = 0; k < REFERENCE.length; k++) {
            assertEquals(REFERENCE[k], path.futility(k), TOLERANCE, "look " + (k + 1));
        }
        assertEquals(Double.NEGATIVE_INFINITY, path.futility(4), "the last look has no bound of its own");
        assertEquals(5 * SHARE_WITHOUT_EFFECT, path.expectedLooksWithoutEffect(), TOLERANCE);
        assertEquals(5 * SHARE, path.expectedLooks(), TOLERANCE);
    }

    @Test
    void isMirroredWhenLowerIsBetter() throws BadInputException {
        PlannedPath path = path(PLAN + "better: lower\n");
        for (int k = 0; k < REFERENCE.length; k++) {
            assertEquals(-REFERENCE[k], path.futility(k), TOLERANCE, "look " + (k + 1));
        }
        assertEquals(Double.POSITIVE_INFINITY, path.futility(4));
        assertEquals(5 * SHARE_WITHOUT_EFFECT, path.expectedLooksWithoutEffect(), TOLERANCE);
        assertEquals(5 * SHARE, path.expectedLooks(), TOLERANCE);
    }

    /** Futility comes sooner than harm, and the drift towards the benefit is the same: hardly anything changes. */
    @Test
    void stopsForHarmBesideFutility() throws BadInputException {
        PlannedPath path = path(PLAN.replace("alpha: 0.025, sides: one", "alpha: 0.05, sides: two"));
        for (int k = 0; k < REFERENCE.length; k++) {
            assertEquals(REFERENCE[k], path.futility(k), TOLERANCE, "look " + (k + 1));
        }
        assertEquals(5 * SHARE_WITHOUT_EFFECT, path.expectedLooksWithoutEffect(), TOLERANCE);
    }

    @Test
    void hasNoBoundsWithoutFutility() throws BadInputException {
        PlannedPath path = path(PLAN.replace("futility: {spending: {hwang-shih-decani: -2}}\n", ""));
        assertEquals(Double.NEGATIVE_INFINITY, path.futility(0));
        assertTrue(path.expectedLooksWithoutEffect() > 4.9, "a false alarm comes late if at all");
    }

    /** No benefit is declared in the first half of the run; futility is. */
    @Test
    void mayBeFutileBeforeABenefitIsOpen() throws BadInputException {
        PlannedPath path = path(PLAN.replace("fractions: [0.2, 0.4, 0.6, 0.8, 1.0]", "every: P7D")
                .replace("at-most: P28D", "at-least: P14D, at-most: P28D"));
        assertTrue(Double.isFinite(path.futility(0)), "look 1: " + path.futility(0));
        assertTrue(path.futility(0) < path.futility(1) && path.futility(1) < path.futility(2));
    }

    private static PlannedPath path(String text) throws BadInputException {
        Plan plan = PlanReader.parse("fare.yaml", text).orElseThrow();
        return new PlannedPath(plan, PlanDesign.of(plan, plan.challengers().get(0)));
    }
}
