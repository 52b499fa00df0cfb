package io.tallyward.service.rehearse;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertFalse;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.engine.record.DecisionRecord.Comparison;
import io.tallyward.engine.record.Verdict;
import io.tallyward.statistics.boundary.BoundarySequence;
import io.tallyward.statistics.boundary.Look;
import io.tallyward.statistics.inference.EffectScale;
import io.tallyward.statistics.inference.Interval;
import io.tallyward.statistics.inference.StagewiseInference;
import java.util.ArrayList;
import java.util.List;
import org.junit.jupiter.api.Test;

class StopEstimateTest {

    private static final double MAXIMUM_INFORMATION = 250_000;
    private static final double LEVEL = 0.95;

    @Test
    void needsNoAdjustmentAfterASingleLook() {
        List<Look> looks = looks(0.4);
        StopEstimate estimate = StopEstimate.of(comparisons(looks, 3), 0.01, LEVEL);
        assertEquals(estimate.naive(), estimate.adjusted(), 1e-15);
        // 3 / sqrt(0.4 * 250000) and 1.96 such errors around it: from 0.0033 to 0.0157.
        assertEquals(0.009487, estimate.naive(), 1e-6);
        assertTrue(estimate.naiveCovers() && estimate.stagewiseCovers());
        assertFalse(StopEstimate.of(comparisons(looks, 3), 0.0032, LEVEL).stagewiseCovers());
        assertFalse(StopEstimate.of(comparisons(looks, 3), 0.0158, LEVEL).naiveCovers());
    }

    @Test
    void coversWhatTheSolvedIntervalCovers() {
        List<Look> looks = looks(0.2, 0.5, 0.7, 1.05);
        EffectScale scale = new EffectScale(MAXIMUM_INFORMATION);
        for (double z : new double[] {-2.5, -0.3, 1.2, 2.4, 4}) {
            StagewiseInference inference = StagewiseInference.of(looks, z);
            Interval interval = scale.riskDifference(inference.interval(LEVEL));
            for (double truth : new double[] {
                0,
                0.001,
                interval.lower() - 1e-9,
                interval.lower() + 1e-9,
                interval.upper() - 1e-9,
                interval.upper() + 1e-9
            }) {
                StopEstimate estimate = StopEstimate.of(comparisons(looks, z), truth, LEVEL);
                assertEquals(interval.contains(truth), estimate.stagewiseCovers(), () -> z + " " + truth);
                assertEquals(scale.riskDifference(inference.medianUnbiasedDrift()), estimate.adjusted(), 1e-15);
            }
        }
    }

    @Test
    void takesALastLookThatRepeatsTheOneBeforeInItsPlace() {
        List<Look> looks = looks(0.2, 0.5);
        List<Look> again = new ArrayList<>(looks);
        Look last = looks.get(1);
        again.add(new Look(3, last.information(), 0.025, 0.025, 2, -2));
        assertEquals(
                StopEstimate.of(comparisons(looks, 1.9), 0.002, LEVEL).adjusted(),
                StopEstimate.of(comparisons(again, 1.9), 0.002, LEVEL).adjusted());
    }

    private static List<Look> looks(double... information) {
        BoundarySequence sequence = new BoundarySequence();
        List<Look> looks = new ArrayList<>();
        for (int k = 0; k < information.length; k++) {
            double spent = 0.025 * (k + 1) / information.length;
            looks.add(sequence.next(information[k], spent, spent));
        }
        return looks;
    }

    private static List<Comparison> comparisons(List<Look> looks, double z) {
        return looks.stream().map(look -> comparison(look, z)).toList();
    }

    private static Comparison comparison(Look look, double z) {
        double information = look.information() * MAXIMUM_INFORMATION;
        double root = Math.sqrt(information);
        return new Comparison(
                "wide",
                look.number(),
                z,
                information,
                look.information(),
                look.upperSpent() + look.lowerSpent(),
                look.upper(),
                look.lower(),
                null,
                z / root,
                (z - look.upper()) / root,
                (z - look.lower()) / root,
                Verdict.CONTINUE,
                null,
                "");
    }
}
