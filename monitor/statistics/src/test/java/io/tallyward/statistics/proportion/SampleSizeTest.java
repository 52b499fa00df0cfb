package io.tallyward.statistics.proportion;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertThrows;

import io.tallyward.statistics.distribution.Normal;
import java.util.List;
import org.junit.jupiter.api.Test;

class SampleSizeTest {

    private static final double DRIFT = Normal.upperQuantile(0.025) + Normal.quantile(0.8);

    @Test
    void isTheTextbookFormulaForTwoEqualArms() {
        double information = SampleSize.maximumInformation(DRIFT, 0.006);
        SampleSize size = SampleSize.of(information, 0.12, 0.006, 0.5, 0.5);
        long perArm = (long) Math.ceil(2 * 0.123 * 0.877 * DRIFT * DRIFT / (0.006 * 0.006));
        assertEquals(perArm, size.controlTrials());
        assertEquals(perArm, size.variantTrials());
        assertEquals(0.123, size.pooledRate(), 1e-15);
    }

    /** Common practice: sixteen times p q over the squared difference, per arm, for two-sided 0.05 and power 0.8. */
    @Test
    void agreesWithTheRuleOfSixteen() {
        SampleSize size = SampleSize.of(SampleSize.maximumInformation(DRIFT, 0.01), 0.095, 0.01, 0.5, 0.5);
        assertEquals(16 * 0.1 * 0.9 / 1e-4, size.variantTrials(), 0.02 * size.variantTrials());
    }

    @Test
    void gathersTheInformationItWasAskedFor() {
        double information = SampleSize.maximumInformation(DRIFT, -0.004);
        SampleSize size = SampleSize.of(information, 0.03, -0.004, 0.2, 0.1);
        assertEquals(2.0, (double) size.controlTrials() / size.variantTrials(), 1e-4);
        long successes = Math.round(0.026 * size.variantTrials());
        long controlSuccesses = Math.round(0.03 * size.controlTrials());
        StratifiedComparison comparison = StratifiedComparison.of(
                        List.of(new Stratum(successes, size.variantTrials(), controlSuccesses, size.controlTrials())))
                .orElseThrow();
        // Half a success in the variant's 530 is worth a thousandth of the information, and six of the difference.
        assertEquals(information, comparison.information(), 2e-3 * information);
        assertEquals(-DRIFT, comparison.z(), 2e-2);
    }

    @Test
    void refusesWhatIsNoRateOrShare() {
        assertThrows(IllegalArgumentException.class, () -> SampleSize.of(100, 0, 0.1, 0.5, 0.5));
        assertThrows(IllegalArgumentException.class, () -> SampleSize.of(100, 0.95, 0.1, 0.5, 0.5));
        assertThrows(IllegalArgumentException.class, () -> SampleSize.of(100, 0.5, 0.1, 0, 0.5));
        assertThrows(IllegalArgumentException.class, () -> SampleSize.of(100, 0.5, 0.1, 0.5, Double.NaN));
        assertThrows(IllegalArgumentException.class, () -> SampleSize.of(0, 0.5, 0.1, 0.5, 0.5));
        assertThrows(IllegalArgumentException.class, () -> SampleSize.maximumInformation(2.8, 0));
        assertThrows(IllegalArgumentException.class, () -> SampleSize.maximumInformation(0, 0.1));
    }
}
