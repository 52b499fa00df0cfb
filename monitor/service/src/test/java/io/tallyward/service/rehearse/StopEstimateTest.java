package io.tallyward.service.rehearse;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.engine.record.Adjusted;
import io.tallyward.engine.record.DecisionRecord.Comparison;
import io.tallyward.engine.record.Estimated;
import io.tallyward.engine.record.Verdict;
import java.util.Optional;
import org.junit.jupiter.api.Test;

class StopEstimateTest {

    private static final double INFORMATION = 10_000;
    private static final double OBSERVED = 0.03;

    private static final Estimated DIFFERENCE = new Estimated(0.025, 0.004, 0.046);

    @Test
    void readsTheRecord() {
        StopEstimate estimate = of(0.03, DIFFERENCE, -0.01, 0.07);
        assertEquals(OBSERVED, estimate.naive());
        assertEquals(0.025, estimate.adjusted());
        assertEquals(0.95, estimate.level());
        assertTrue(estimate.naiveCovers() && estimate.repeatedCovers() && estimate.stagewiseCovers());
    }

    /** The standard error is 0.01, so that the naive interval goes from 0.0104 to 0.0496; 1.96 is in every textbook. */
    @Test
    void tellsWhichIntervalHoldsTheTruth() {
        assertCovers(false, true, false, 0.05);
        assertCovers(true, true, false, 0.0495);
        assertCovers(true, true, true, 0.046);
        assertCovers(false, true, true, 0.0103);
        assertCovers(false, true, false, -0.01);
        assertCovers(false, false, false, -0.011);
        assertCovers(false, false, false, 0.071);
    }

    private static void assertCovers(boolean naive, boolean repeated, boolean stagewise, double truth) {
        StopEstimate estimate = of(truth, DIFFERENCE, -0.01, 0.07);
        assertEquals(naive, estimate.naiveCovers());
        assertEquals(repeated, estimate.repeatedCovers());
        assertEquals(stagewise, estimate.stagewiseCovers());
    }

    @Test
    void reachesToInfinityWhereAnEndIsOpen() {
        StopEstimate low = of(-5, new Estimated(0.02, null, 0.04), null, 0.07);
        assertTrue(low.stagewiseCovers() && low.repeatedCovers());
        StopEstimate high = of(5, new Estimated(0.02, 0.01, null), 0.001, null);
        assertTrue(high.stagewiseCovers() && high.repeatedCovers());
    }

    @Test
    void hasNothingToReadFromALookThatEndedNothing() {
        assertEquals(Optional.empty(), StopEstimate.of(look(null, null, null), 0));
    }

    private static StopEstimate of(double truth, Estimated difference, Double lower, Double upper) {
        Adjusted adjusted = new Adjusted(0.01, 0.95, new Estimated(2.5, 0.4, 4.6), difference, null);
        return StopEstimate.of(look(adjusted, lower, upper), truth).orElseThrow();
    }

    private static Comparison look(Adjusted adjusted, Double lower, Double upper) {
        return new Comparison(
                "wide",
                3,
                3.0,
                INFORMATION,
                0.5,
                0.5,
                0.05,
                0.01,
                2.9,
                -2.9,
                null,
                OBSERVED,
                lower,
                upper,
                null,
                null,
                adjusted,
                Verdict.STOP_BENEFIT,
                null,
                "");
    }
}
