package io.tallyward.service.rehearse;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertTrue;
import static org.junit.jupiter.params.provider.Arguments.arguments;

import io.tallyward.service.rehearse.RehearsalReport.Estimates;
import java.util.ArrayList;
import java.util.Arrays;
import java.util.List;
import java.util.OptionalLong;
import java.util.stream.Stream;
import org.junit.jupiter.api.Tag;
import org.junit.jupiter.api.Test;
import org.junit.jupiter.params.ParameterizedTest;
import org.junit.jupiter.params.provider.Arguments;
import org.junit.jupiter.params.provider.MethodSource;
import org.junit.jupiter.params.provider.ValueSource;

/** What a plan promises, against what the deciding rules do over thousands of runs with a fixed seed. */
@Tag("slow")
class OperatingCharacteristicsTest {

    private static final long RUNS = 10_000;
    private static final double ALPHA = 0.05;

    /** Monte Carlo standard errors that a rate may be off. */
    private static final double STANDARD_ERRORS = 3;

    private static final String ERRATIC = "looks: {fractions: [0.03, 0.05, 0.31, 0.33, 0.5, 0.92, 1]}";

    /** Every family at rates from one half to one in a thousand, at even and at erratic looks, with two arms and with four. */
    static Stream<Arguments> plansWithoutAnEffect() {
        List<Arguments> plans = new ArrayList<>();
        for (String spending : List.of("obrien-fleming", "pocock")) {
            for (double rate : new double[] {0.5, 0.1, 0.01, 0.001}) {
                plans.add(arguments(spending + " at " + rate, at(rate, Quay.TEN_LOOKS, spending), rate));
            }
            plans.add(arguments(spending + ", erratic", erratic(at(0.1, Quay.TEN_LOOKS, spending)), 0.1));
            plans.add(arguments(spending + ", four arms", at(0.1, Quay.FOUR_ARMS, spending), 0.1));
            plans.add(arguments(spending + ", four arms, erratic", erratic(at(0.1, Quay.FOUR_ARMS, spending)), 0.1));
        }
        return plans.stream();
    }

    private static String at(double rate, String plan, String spending) {
        return plan.replace(
                "baseline: 0.12, smallest-effect: 0.03",
                "baseline: " + rate + ", smallest-effect: {relative: 0.1}, spending: " + spending);
    }

    private static String erratic(String plan) {
        return plan.replace("looks: {every: P2D}", ERRATIC);
    }

    @ParameterizedTest(name = "{0}")
    @MethodSource("plansWithoutAnEffect")
    void keepsTheLevel(String name, String plan, double rate) {
        double[] rates = new double[Quay.plan(plan).variants().size()];
        Arrays.fill(rates, rate);
        RehearsalReport report = Quay.rehearsed(plan, Quay.request(RUNS, rates));
        double allowed = ALPHA + STANDARD_ERRORS * Math.sqrt(ALPHA * (1 - ALPHA) / RUNS);
        assertTrue(report.rejection().value() <= allowed, () -> name + ": " + report.rejection());
        assertTrue(report.naivePeeking().value() > 0.15, () -> name + ": " + report.naivePeeking());
    }

    /**
     * With a tenth of the units in the variant and some hundred successes in all, one tail is heavier than the normal law says.
     * Looks wait, the last one says so in its record, and what is left of the error stays within the level of both tails.
     */
    @ParameterizedTest
    @ValueSource(strings = {"obrien-fleming", "pocock"})
    void waitsWhereTheNormalLawFails(String spending) {
        String plan = at(0.001, Quay.TEN_LOOKS, spending)
                .replace("relative: 0.1", "relative: 1")
                .replace("control: true}, wide: {share: 0.5}", "control: true}, wide: {share: 0.1}")
                .replace("plain: {share: 0.5", "plain: {share: 0.9");
        RehearsalReport report = Quay.rehearsed(plan, Quay.request(RUNS, 0.001, 0.001));
        double allowed = ALPHA + STANDARD_ERRORS * Math.sqrt(ALPHA * (1 - ALPHA) / RUNS);
        assertTrue(report.rejection().value() <= allowed, () -> spending + ": " + report.rejection());
        assertTrue(report.looks().value() < 5, () -> spending + ", looks: " + report.looks());
    }

    @ParameterizedTest
    @ValueSource(strings = {"obrien-fleming", "pocock"})
    void hasThePlannedPower(String spending) {
        RehearsalReport report = Quay.rehearsed(spent(spending), Quay.request(RUNS, 0.12, 0.15));
        // One point, and what chance adds.
        double allowed = 0.01 + STANDARD_ERRORS * report.benefit().standardError();
        assertEquals(0.8, report.benefit().value(), allowed);
    }

    @Test
    void intervalsHoldTheTruthAsOftenAsTheyPromise() {
        RehearsalRequest request =
                new RehearsalRequest(4_000, 3, new double[] {0.12, 0.15}, OptionalLong.empty(), false, true, 2);
        Estimates estimates = Quay.rehearsed(spent("pocock"), request)
                .arms()
                .get(0)
                .estimates()
                .orElseThrow();
        double allowed = 0.01 + STANDARD_ERRORS * estimates.stagewiseCoverage().standardError();
        assertEquals(estimates.level(), estimates.stagewiseCoverage().value(), allowed);
        assertTrue(estimates.repeatedCoverage().value() >= estimates.level() - allowed);
        assertEquals(0.5, estimates.adjustedTooLow().value(), 0.01 + STANDARD_ERRORS * 0.5 / Math.sqrt(4_000));
    }

    private static String spent(String spending) {
        return Quay.TEN_LOOKS.replace("smallest-effect: 0.03", "smallest-effect: 0.03, spending: " + spending);
    }
}
