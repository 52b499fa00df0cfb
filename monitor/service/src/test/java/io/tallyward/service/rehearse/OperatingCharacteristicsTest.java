package io.tallyward.service.rehearse;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.service.rehearse.RehearsalReport.Estimates;
import java.util.OptionalLong;
import org.junit.jupiter.api.Tag;
import org.junit.jupiter.api.Test;
import org.junit.jupiter.params.ParameterizedTest;
import org.junit.jupiter.params.provider.ValueSource;

/** What a plan promises, against what the deciding rules do over thousands of runs with a fixed seed. */
@Tag("slow")
class OperatingCharacteristicsTest {

    private static final long RUNS = 10_000;
    private static final double ALPHA = 0.05;

    /** Monte Carlo standard errors that a rate may be off. */
    private static final double STANDARD_ERRORS = 3;

    @ParameterizedTest
    @ValueSource(strings = {"obrien-fleming", "pocock"})
    void keepsTheLevelAtTenLooks(String spending) {
        RehearsalReport report = Quay.rehearsed(spent(spending), Quay.request(RUNS, 0.12, 0.12));
        double allowed = ALPHA + STANDARD_ERRORS * Math.sqrt(ALPHA * (1 - ALPHA) / RUNS);
        assertTrue(report.rejection().value() <= allowed, () -> spending + ": " + report.rejection());
        assertTrue(report.naivePeeking().value() > 0.15, () -> spending + ": " + report.naivePeeking());
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
