package io.tallyward.statistics.split;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertThrows;
import static org.junit.jupiter.api.Assertions.assertTrue;

import java.util.Random;
import org.junit.jupiter.api.Test;

class SequentialEvidenceTest {

    private static final long SEED = 1939;

    @Test
    void keepsTheLargestReading() {
        SequentialEvidence evidence = SequentialEvidence.NONE.after(-3);
        assertEquals(SequentialEvidence.NONE, evidence);
        assertEquals(1, evidence.pValue());
        assertEquals(0, evidence.log10PValue());
        evidence = evidence.after(Math.log(40)).after(Math.log(2)).after(-50);
        assertEquals(1.0 / 40, evidence.pValue(), 1e-17);
        assertEquals(-Math.log10(40), evidence.log10PValue(), 1e-15);
    }

    @Test
    void neverUnderflowsInItsLogarithm() {
        SequentialEvidence evidence = SequentialEvidence.NONE.after(1e9);
        assertEquals(0, evidence.pValue());
        assertEquals(-1e9 / Math.log(10), evidence.log10PValue(), 1e-6);
    }

    /** Read after every unit, two epochs with shares of their own: seldom below its level, though read 400 times. */
    @Test
    void seldomSpeaksWithoutAMismatchHoweverOftenItIsRead() {
        Random random = new Random(SEED);
        double[][] shares = {{0.1, 0.9}, {0.5, 0.5}};
        int runs = 4000;
        int alarms = 0;
        for (int run = 0; run < runs; run++) {
            SequentialEvidence evidence = SequentialEvidence.NONE;
            double earlier = 0;
            for (double[] share : shares) {
                long[] counts = new long[2];
                double now = 0;
                for (int unit = 0; unit < 200; unit++) {
                    counts[random.nextDouble() < share[0] ? 0 : 1]++;
                    now = SequentialSplitTest.logBayesFactor(20, share, counts);
                    evidence = evidence.after(earlier + now);
                }
                earlier += now;
            }
            alarms += evidence.pValue() <= 0.05 ? 1 : 0;
        }
        // at most the level, by Ville's inequality; and not so far below that the test would be idle
        assertTrue(alarms <= 0.05 * runs, "seed " + SEED + ": " + alarms);
        assertTrue(alarms >= 0.005 * runs, "seed " + SEED + ": " + alarms);
    }

    @Test
    void refusesWhatIsNoEvidence() {
        for (double log : new double[] {Double.NaN, Double.POSITIVE_INFINITY}) {
            assertThrows(IllegalArgumentException.class, () -> SequentialEvidence.NONE.after(log));
            assertThrows(IllegalArgumentException.class, () -> new SequentialEvidence(log));
        }
        assertThrows(IllegalArgumentException.class, () -> new SequentialEvidence(-1));
    }
}
