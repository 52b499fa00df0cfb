package io.tallyward.engine.decide;

import static org.junit.jupiter.api.Assertions.assertArrayEquals;
import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.engine.Plans;
import io.tallyward.engine.plan.AllocationEpoch;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.Spending;
import io.tallyward.engine.plan.Spending.Family;
import io.tallyward.engine.plan.TestPlan.Better;
import io.tallyward.engine.plan.TestPlan.Sides;
import io.tallyward.engine.plan.Variant;
import io.tallyward.statistics.boundary.ExitProbabilities;
import io.tallyward.statistics.boundary.Look;
import java.time.Duration;
import java.util.List;
import java.util.Map;
import java.util.function.IntToDoubleFunction;
import java.util.stream.IntStream;
import org.junit.jupiter.api.Test;

/** What a plan means before any data. Five equal looks, two-sided 0.05, unless a test says otherwise. */
class PlanDesignTest {

    /** Reference drifts carry 13 digits; the solver's own accuracy is 1e-11, quadrature adds a little. */
    private static final double DRIFT_TOLERANCE = 1e-7;

    /** Published inflation factors have three decimals. */
    private static final double PUBLISHED_TOLERANCE = 5e-4;

    private static PlanDesign design(Plans plan) {
        Plan built = plan.build();
        return PlanDesign.of(built, built.challengers().get(0));
    }

    private static Plans fiveLooks(Family family, double power) {
        return Plans.plan("quay-banner").spending(Spending.of(family)).power(power);
    }

    /** An independent reference computation of drift and inflation, checked against two other programs and simulation. */
    @Test
    void needsTheReferenceDriftAndInflation() {
        record Reference(Family family, double power, double drift, double inflation) {}
        List<Reference> references = List.of(
                new Reference(Family.OBRIEN_FLEMING, 0.8, 2.836001250142, 1.02471987889),
                new Reference(Family.OBRIEN_FLEMING, 0.9, 3.278706573942, 1.023078326166),
                new Reference(Family.POCOCK, 0.8, 3.085085931611, 1.212625945047),
                new Reference(Family.POCOCK, 0.9, 3.539562286018, 1.192347648262));
        for (Reference reference : references) {
            PlanDesign design = design(fiveLooks(reference.family(), reference.power()));
            assertEquals(reference.drift(), design.drift(), DRIFT_TOLERANCE, reference::toString);
            assertEquals(reference.inflation(), design.inflation(), DRIFT_TOLERANCE, reference::toString);
        }
    }

    /** The same independent computation, for the planned boundaries. */
    @Test
    void plansTheReferenceBoundaries() {
        assertArrayEquals(
                new double[] {4.87688494879076, 3.35701192157464, 2.68028006454499, 2.28981676771195, 2.03103204331006},
                upper(design(fiveLooks(Family.OBRIEN_FLEMING, 0.8))),
                DRIFT_TOLERANCE);
        assertArrayEquals(
                new double[] {2.43797668805001, 2.42681385815011, 2.41019384027132, 2.39664540064873, 2.38598457162254},
                upper(design(fiveLooks(Family.POCOCK, 0.8))),
                DRIFT_TOLERANCE);
    }

    private static double[] upper(PlanDesign design) {
        return design.looks().stream().mapToDouble(Look::upper).toArray();
    }

    /**
     * Jennison and Turnbull, "Group Sequential Methods with Applications to Clinical Trials" (2000), give inflation factors
     * of 1.207 (Pocock) and 1.026 (O'Brien and Fleming) for five looks, two-sided 0.05, power 0.9; recalled from memory.
     * They hold for the classical constants 2.413 and 2.040 (same source), not for the spending functions named after
     * them, so the classical boundaries are put through the same integration here.
     */
    @Test
    void agreesWithThePublishedInflationOfTheClassicalBoundaries() {
        assertEquals(1.207, classicalInflation(look -> 2.41317622006), PUBLISHED_TOLERANCE, "Pocock");
        assertEquals(
                1.026, classicalInflation(look -> 2.0400731748 * Math.sqrt(5.0 / look)), PUBLISHED_TOLERANCE, "OBF");
    }

    /** The spending functions are approximations of the classical boundaries, and need about as much. */
    @Test
    void inflatesAboutAsTheClassicalBoundariesDo() {
        assertEquals(1.207, design(fiveLooks(Family.POCOCK, 0.9)).inflation(), 0.02);
        assertEquals(1.026, design(fiveLooks(Family.OBRIEN_FLEMING, 0.9)).inflation(), 0.005);
    }

    private static double classicalInflation(IntToDoubleFunction boundary) {
        double[] information =
                IntStream.rangeClosed(1, 5).mapToDouble(look -> look / 5.0).toArray();
        double[] upper = IntStream.rangeClosed(1, 5).mapToDouble(boundary).toArray();
        double[] lower = IntStream.range(0, 5).mapToDouble(look -> -upper[look]).toArray();
        double below = 3;
        double above = 4;
        while (above - below > 1e-10) {
            double middle = (below + above) / 2;
            if (ExitProbabilities.of(information, upper, lower, middle).totalUpper() < 0.9) {
                below = middle;
            } else {
                above = middle;
            }
        }
        double fixed = 1.959963984540054 + 1.2815515655446004;
        return (above / fixed) * (above / fixed);
    }

    @Test
    void asksForTheInformationAtWhichTheDriftIsReached() {
        PlanDesign design = design(fiveLooks(Family.OBRIEN_FLEMING, 0.8).smallestEffect(0.02));
        assertEquals(Math.pow(2.836001250142 / 0.02, 2), design.maximumInformation(), 1e-2);
        PlanDesign lower = design(
                fiveLooks(Family.OBRIEN_FLEMING, 0.8).smallestEffect(0.02).better(Better.LOWER));
        assertEquals(design.maximumInformation(), lower.maximumInformation(), 0);
    }

    /**
     * The textbook sample size of a pooled two-proportion test (common practice): with equal arms, trials per arm are
     * {@code 2 p (1 - p) (drift / effect)^2} at the mean rate {@code p}.
     */
    @Test
    void plansTheTextbookNumberOfTrials() {
        PlanDesign design =
                design(fiveLooks(Family.OBRIEN_FLEMING, 0.8).baseline(0.2).smallestEffect(0.02));
        long perArm = (long) Math.ceil(2 * 0.21 * 0.79 * Math.pow(2.836001250142 / 0.02, 2));
        assertEquals(Map.of("plain", perArm, "wide", perArm), design.trials());
        PlanDesign lower = design(fiveLooks(Family.OBRIEN_FLEMING, 0.8)
                .baseline(0.2)
                .smallestEffect(0.02)
                .better(Better.LOWER));
        long perArmBelow = (long) Math.ceil(2 * 0.19 * 0.81 * Math.pow(2.836001250142 / 0.02, 2));
        assertEquals(perArmBelow, lower.trials().get("wide"));
    }

    @Test
    void plansTrialsForTheSharesOfTheLastEpoch() {
        PlanDesign even = design(fiveLooks(Family.OBRIEN_FLEMING, 0.8));
        PlanDesign ramp = design(Plans.plan("quay-banner")
                .variants(new Variant("plain", 0.9, true), new Variant("wide", 0.1, false))
                .epochs(new AllocationEpoch(Plans.FROM.plus(Duration.ofDays(1)), Map.of("plain", 0.5, "wide", 0.5))));
        assertEquals(even.trials(), ramp.trials());
    }

    @Test
    void needsMoreForEachOfSeveralChallengers() {
        PlanDesign two = design(fiveLooks(Family.OBRIEN_FLEMING, 0.8));
        PlanDesign three = design(fiveLooks(Family.OBRIEN_FLEMING, 0.8)
                .variants(
                        new Variant("plain", 0.4, true),
                        new Variant("wide", 0.3, false),
                        new Variant("tall", 0.3, false)));
        assertEquals(0.025, three.alpha(), 1e-15);
        assertEquals(0.0125, three.benefitLevel(), 1e-15);
        assertTrue(three.drift() > two.drift());
    }

    @Test
    void plansNoBenefitBoundaryBeforeTheMinimumRunIsOver() {
        List<Look> looks = design(fiveLooks(Family.OBRIEN_FLEMING, 0.8).atLeast(Duration.ofDays(3)))
                .looks();
        for (Look look : looks) {
            assertEquals(look.number() < 3, Double.isInfinite(look.upper()), () -> "look " + look.number());
            assertTrue(Double.isFinite(look.lower()), () -> "look " + look.number());
        }
    }

    @Test
    void plansNoHarmBoundaryForAOneSidedTest() {
        PlanDesign design =
                design(fiveLooks(Family.OBRIEN_FLEMING, 0.8).sides(Sides.ONE).alpha(0.025));
        assertEquals(0.025, design.benefitLevel(), 1e-15);
        design.looks().forEach(look -> assertTrue(Double.isInfinite(look.lower()), () -> "look " + look.number()));
        assertEquals(2.836001250142, design.drift(), 1e-6, "harm plays next to no part in the power");
    }

    /** One-sided 0.025, power 0.9, looks at 1/2 and 1, futility O'Brien-Fleming type: the same reference computation. */
    @Test
    void needsTheReferenceDriftWithFutility() {
        PlanDesign design = design(Plans.plan("fare-chip")
                .sides(Sides.ONE)
                .alpha(0.025)
                .power(0.9)
                .lookAt(0.5, 1.0)
                .futility(Spending.of(Family.OBRIEN_FLEMING)));
        assertEquals(3.281799723843, design.drift(), DRIFT_TOLERANCE);
        assertEquals(1.025009592213, design.inflation(), DRIFT_TOLERANCE);
    }

    @Test
    void designsVeryManyLooksAsTheyArePlanned() {
        Plans plan = Plans.plan("quay-banner").atMost(Duration.ofDays(14));
        PlanDesign everyOther = design(plan.lookEvery(Duration.ofHours(2)));
        PlanDesign fractions = design(plan.lookAt(
                IntStream.rangeClosed(1, 168).mapToObj(look -> look / 168.0).toArray(Double[]::new)));
        assertEquals(168, everyOther.looks().size());
        assertEquals(fractions.drift(), everyOther.drift(), 0);
        PlanDesign five = design(Plans.plan("quay-banner"));
        assertTrue(everyOther.drift() > five.drift(), "more looks need more");
        assertEquals(1, everyOther.drift() / five.drift(), 0.02, "but hardly so");
    }
}
