package io.tallyward.statistics.split;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertThrows;

import io.tallyward.statistics.ReferenceTable;
import java.util.Random;
import org.apache.commons.math3.stat.inference.ChiSquareTest;
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

    /** Commons Math's comparison of two data sets as the oracle, over random tables with empty cells among them. */
    @Test
    void comparesTwoGroupsAsTheTableWithTwoRows() {
        for (int seed = 0; seed < 500; seed++) {
            Random random = new Random(seed);
            int cells = 2 + random.nextInt(4);
            long[] one =
                    random.longs(cells, 1, 1 + (1L << 2 + random.nextInt(20))).toArray();
            long[] other =
                    random.longs(cells, 1, 1 + (1L << 2 + random.nextInt(20))).toArray();
            one[random.nextInt(cells)] *= random.nextInt(2);
            PearsonSplit split = PearsonSplit.between(one, other);
            double chiSquare = new ChiSquareTest().chiSquareDataSetsComparison(one, other);
            double pValue = new ChiSquareTest().chiSquareTestDataSetsComparison(one, other);
            assertEquals(chiSquare, split.chiSquare(), 1e-10 * (1 + chiSquare), "seed " + seed);
            // The oracle sums its series no further than this.
            assertEquals(pValue, split.pValue(), 1e-9, "seed " + seed);
            assertEquals(split.chiSquare(), PearsonSplit.between(other, one).chiSquare(), 1e-10 * (1 + chiSquare));
        }
    }

    /** Pearson's 2 by 2 table in the form N (ad - bc)^2 / (product of margins), by hand: 100 (30 * 40 - 20 * 10)^2 / (50 50 40 60). */
    @Test
    void comparesATableThatIsEasyToCheck() {
        PearsonSplit split = PearsonSplit.between(new long[] {30, 20}, new long[] {10, 40});
        assertEquals(100.0 * 1_000_000 / 6_000_000, split.chiSquare(), 1e-12);
        assertEquals(1, split.degreesOfFreedom());
    }

    @Test
    void comparesNothingWithAnEmptyGroupAndLeavesOutEmptyCells() {
        assertEquals(PearsonSplit.NONE, PearsonSplit.between(new long[] {0, 0}, new long[] {3, 4}));
        assertEquals(PearsonSplit.NONE, PearsonSplit.between(new long[] {2, 0}, new long[] {3, 0}));
        PearsonSplit split = PearsonSplit.between(new long[] {30, 0, 20}, new long[] {10, 0, 40});
        assertEquals(PearsonSplit.between(new long[] {30, 20}, new long[] {10, 40}), split);
        assertThrows(IllegalArgumentException.class, () -> PearsonSplit.between(new long[] {1, -1}, new long[] {1, 1}));
        assertThrows(IllegalArgumentException.class, () -> PearsonSplit.between(new long[] {1, 1}, new long[] {1}));
        assertThrows(IllegalArgumentException.class, () -> PearsonSplit.between(new long[] {1}, new long[] {1}));
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
