package io.tallyward.statistics.split;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertThrows;

import io.tallyward.statistics.ReferenceTable;
import org.junit.jupiter.api.Test;

class PearsonSplitTest {

    /** Relative; squared gaps of counts near 1e11 keep this much of their doubles. */
    private static final double STATISTIC = 1e-12;

    /** Absolute; a perfect fit leaves the square of the shares' own rounding. */
    private static final double NOTHING = 1e-20;

    /** Relative, times the statistic: an error of the statistic counts half in the exponent of the p-value. */
    private static final double P_VALUE = 1e-13;

    /** Smaller p-values read as 0 in the reference and need not be the same subnormal number. */
    private static final double LEAST = 1e-300;

    @Test
    void agreesWithSixtyDigitArithmeticAndMendel() {
        ReferenceTable.read("srm_chisq.csv").rows().forEach(row -> {
            PearsonSplit split = PearsonSplit.of(row.numbers("ratio"), row.counts("observed"));
            String where = row.text("case_id");
            double chiSquare = row.number("chi_square");
            double pValue = row.number("p_value");
            assertEquals(chiSquare, split.chiSquare(), Math.max(NOTHING, STATISTIC * chiSquare), where);
            assertEquals(row.count("df"), split.degreesOfFreedom(), where);
            assertEquals(pValue, split.pValue(), Math.max(LEAST, P_VALUE * (100 + chiSquare) * pValue), where);
        });
    }

    @Test
    void isNothingBeforeThereAreCounts() {
        assertEquals(PearsonSplit.NONE, PearsonSplit.of(new double[] {1, 1}, new long[] {0, 0}));
    }

    @Test
    void addsUpOverEpochs() {
        PearsonSplit even = PearsonSplit.of(new double[] {1, 1}, new long[] {52, 48});
        PearsonSplit tilted = PearsonSplit.of(new double[] {1, 9}, new long[] {15, 85});
        PearsonSplit both = even.plus(tilted);
        assertEquals(2, both.degreesOfFreedom());
        assertEquals(even.chiSquare() + tilted.chiSquare(), both.chiSquare());
        // With two degrees of freedom the upper tail is exp(-x/2).
        assertEquals(Math.exp(-both.chiSquare() / 2), both.pValue(), 1e-14);
        assertEquals(even, even.plus(PearsonSplit.NONE));
        assertEquals(even.plus(tilted), tilted.plus(even));
    }

    @Test
    void refusesSharesThatAreNone() {
        assertThrows(IllegalArgumentException.class, () -> PearsonSplit.of(new double[] {1, 0}, new long[] {1, 1}));
        assertThrows(IllegalArgumentException.class, () -> PearsonSplit.of(new double[] {1, 1}, new long[] {1, -1}));
        assertThrows(IllegalArgumentException.class, () -> PearsonSplit.of(new double[] {1, 1}, new long[] {1}));
        assertThrows(IllegalArgumentException.class, () -> PearsonSplit.of(new double[] {1}, new long[] {1}));
    }
}
