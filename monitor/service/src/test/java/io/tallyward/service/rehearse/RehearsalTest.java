package io.tallyward.service.rehearse;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertNotEquals;
import static org.junit.jupiter.api.Assertions.assertThrows;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.service.rehearse.RehearsalReport.Arm;
import io.tallyward.service.rehearse.RehearsalReport.Estimates;
import java.util.ArrayList;
import java.util.List;
import java.util.OptionalLong;
import org.junit.jupiter.api.Test;

class RehearsalTest {

    /** A right rate is farther off than this with probability 1e-3; the seeds are fixed. */
    private static final double STANDARD_ERRORS = 3.3;

    @Test
    void isTheSameToTheBitForAnyNumberOfThreads() {
        String fourLooks = Quay.FOUR_ARMS.replace("every: P2D", "every: P5D");
        RehearsalReport alone = Quay.rehearsed(fourLooks, estimating(110, 1));
        assertEquals(alone, Quay.rehearsed(fourLooks, estimating(110, 3)));
        assertEquals(alone, Quay.rehearsed(fourLooks, estimating(110, 2)));
    }

    private static RehearsalRequest estimating(long runs, int threads) {
        double[] rates = {0.12, 0.12, 0.15, 0.1};
        return new RehearsalRequest(runs, 11, rates, OptionalLong.empty(), false, true, threads);
    }

    @Test
    void dependsOnTheSeed() {
        RehearsalRequest one =
                new RehearsalRequest(100, 1, new double[] {0.12, 0.15}, OptionalLong.empty(), false, false, 1);
        RehearsalRequest two =
                new RehearsalRequest(100, 2, new double[] {0.12, 0.15}, OptionalLong.empty(), false, false, 1);
        assertNotEquals(Quay.rehearsed(Quay.TEN_LOOKS, one), Quay.rehearsed(Quay.TEN_LOOKS, two));
    }

    /**
     * Without an effect: the level of the plan, and for ten uncorrected looks 19.3 % (Armitage, McPherson and Rowe,
     * "Repeated significance tests on accumulating data", JRSS A 132 (1969) 235-244, table 2, recalled).
     */
    @Test
    void keepsTheLevelWherePeekingDoesNot() {
        RehearsalReport report = Quay.rehearsed(Quay.TEN_LOOKS, Quay.request(1_000, 0.12, 0.12));
        assertNear(0.05, report.rejection());
        assertNear(0.025, report.benefit());
        assertNear(0.025, report.harm());
        assertNear(0.193, report.naivePeeking());
        assertTrue(report.looks().value() > 9);
        assertEquals(2 * report.looks().value(), report.days().value(), 1e-9);
        assertEquals(
                report.arrivals() / 20.0 * report.days().value(),
                report.trials().value(),
                20);
        assertAddsUp(report);
    }

    /** With the smallest effect worth finding: the power of the plan. */
    @Test
    void findsTheSmallestEffectAsOftenAsPlanned() {
        RehearsalReport report = Quay.rehearsed(Quay.TEN_LOOKS, Quay.request(800, 0.12, 0.15));
        assertNear(0.8, report.benefit());
        assertEquals(0, report.harm().count());
        assertTrue(report.looks().value() < 8);
        assertAddsUp(report);
    }

    @Test
    void tellsHarmFromBenefit() {
        RehearsalReport down = Quay.rehearsed(Quay.TEN_LOOKS, Quay.request(300, 0.15, 0.12));
        assertTrue(down.harm().value() > 0.7 && down.benefit().count() == 0);
        RehearsalReport lower = Quay.rehearsed(
                Quay.TEN_LOOKS.replace("0.12", "0.15") + "better: lower\n", Quay.request(300, 0.15, 0.12));
        assertTrue(lower.benefit().value() > 0.7 && lower.harm().count() == 0);
    }

    @Test
    void givesUpWhereThePlanHasFutility() {
        String futility = Quay.TEN_LOOKS + "futility: {spending: {hwang-shih-decani: -2}}\n";
        RehearsalReport report = Quay.rehearsed(futility, Quay.request(300, 0.12, 0.12));
        assertTrue(report.futility().value() > 0.5, report::toString);
        assertTrue(report.looks().value() < 8);
        assertAddsUp(report);
    }

    @Test
    void keepsTheFamilyOfSeveralArms() {
        RehearsalReport report = Quay.rehearsed(Quay.FOUR_ARMS, Quay.request(400, 0.12, 0.12, 0.12, 0.12));
        assertTrue(report.rejection().value()
                < 0.05 + STANDARD_ERRORS * report.rejection().standardError());
        assertTrue(report.rejection().value() > 0.02);
        assertEquals(
                List.of("wide", "tall", "dusk"),
                report.arms().stream().map(Arm::variant).toList());
        assertAddsUp(report);
    }

    /** One arm stops early and is no longer shown; the split is then held against the shares of the others. */
    @Test
    void goesOnWithoutAnArmWhoseVerdictIsTold() {
        RehearsalReport report = Quay.rehearsed(Quay.FOUR_ARMS, Quay.request(100, 0.12, 0.2, 0.12, 0.12));
        assertTrue(report.arms().get(0).looks().value()
                < report.arms().get(1).looks().value() - 2);
        assertTrue(report.mismatch().count() <= 2);
        assertTrue(report.benefit().value() > 0.98);
        assertAddsUp(report);
    }

    @Test
    void declaresNoBenefitBeforeTheMinimumRun() {
        String patient = Quay.TEN_LOOKS.replace("at-most", "at-least: P10D, at-most");
        RehearsalReport report = Quay.rehearsed(patient, Quay.request(100, 0.12, 0.3));
        assertEquals(10, report.days().value());
        assertEquals(1, report.benefit().value());
    }

    /** The step of a day is longer than the silence that is tolerated, yet every step has trials. */
    @Test
    void seesNoSilenceInWideSteps() {
        String nervous = Quay.TEN_LOOKS + "trust: {starved-after: PT1H}\n";
        RehearsalReport report = Quay.rehearsed(nervous, Quay.request(200, 0.12, 0.15));
        assertEquals(Quay.rehearsed(Quay.TEN_LOOKS, Quay.request(200, 0.12, 0.15)), report);
    }

    @Test
    void looksWhenTheInformationIsThere() {
        String fractions = Quay.TEN_LOOKS.replace("every: P2D", "fractions: [0.25, 0.5, 0.75, 1.0]");
        RehearsalReport report = Quay.rehearsed(fractions, Quay.request(400, 0.12, 0.12));
        assertEquals(4, report.looks().value(), 0.2);
        assertNear(0.05, report.rejection());
    }

    @Test
    void staysAtTheEndWithoutALook() {
        RehearsalRequest request =
                new RehearsalRequest(20, 1, new double[] {0.12, 0.12}, OptionalLong.of(1), false, true, 1);
        RehearsalReport report = Quay.rehearsed(Quay.TEN_LOOKS, request);
        assertEquals(1, report.exhausted().value());
        assertEquals(new Mean(0, 0, 20), report.looks());
        assertEquals(new Mean(20, 0, 20), report.trials());
        assertEquals(0, report.arms().get(0).stops().get(0).look());
        assertTrue(report.arms().get(0).estimates().isEmpty());
    }

    /** A stop at a boundary makes the observed difference too large and its interval too sure; adjusting mends both. */
    @Test
    void showsWhatStoppingDoesToEstimates() {
        RehearsalReport report = Quay.rehearsed(
                Quay.TEN_LOOKS.replace("0.03}", "0.03, spending: pocock}"),
                new RehearsalRequest(400, 5, new double[] {0.12, 0.15}, OptionalLong.empty(), false, true, 2));
        Estimates estimates = report.arms().get(0).estimates().orElseThrow();
        assertEquals(0.95, estimates.level(), 1e-12);
        assertTrue(estimates.naiveBias().value() > 5 * estimates.naiveBias().standardError());
        assertTrue(
                estimates.adjustedBias().value() < 0.75 * estimates.naiveBias().value());
        assertNear(0.5, estimates.adjustedTooLow());
        assertTrue(estimates.naiveTooLow().value() < 0.4);
        assertNear(0.95, estimates.stagewiseCoverage());
        assertTrue(estimates.repeatedCoverage().value() >= 0.95);
    }

    @Test
    void tellsItsProgress() throws InterruptedException {
        List<Long> steps = new ArrayList<>();
        new Rehearsal(Quay.plan(Quay.TEN_LOOKS), Quay.request(120, 0.12, 0.3)).run(steps::add);
        assertEquals(List.of(50L, 50L, 20L), steps);
    }

    @Test
    void refusesWhatCannotBeRehearsed() {
        assertThrows(IllegalArgumentException.class, () -> Quay.request(0, 0.12, 0.12));
        assertThrows(IllegalArgumentException.class, () -> Quay.request(1, 0.12, Double.NaN));
        assertThrows(IllegalArgumentException.class, () -> Quay.request(1, 0.12, 1));
        assertThrows(
                IllegalArgumentException.class,
                () -> new Rehearsal(Quay.plan(Quay.TEN_LOOKS), Quay.request(1, 0.12, 0.12, 0.12)));
    }

    private static void assertNear(double expected, Rate rate) {
        double error = Math.sqrt(expected * (1 - expected) / rate.of());
        assertEquals(expected, rate.value(), STANDARD_ERRORS * error);
    }

    private static void assertAddsUp(RehearsalReport report) {
        long runs = report.rejection().of();
        assertEquals(
                runs,
                report.rejection().count()
                        + report.futility().count()
                        + report.exhausted().count()
                        + report.withheld().count());
        for (Arm arm : report.arms()) {
            assertEquals(
                    runs,
                    arm.stops().stream().mapToLong(RehearsalReport.Stop::total).sum());
            assertEquals(
                    runs, arm.endings().values().stream().mapToLong(Rate::count).sum());
        }
    }
}
