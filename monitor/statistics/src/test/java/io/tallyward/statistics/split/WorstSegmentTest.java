package io.tallyward.statistics.split;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertThrows;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.statistics.ReferenceTable;
import io.tallyward.statistics.ReferenceTable.Row;
import java.util.HashMap;
import java.util.List;
import java.util.Map;
import java.util.Random;
import org.apache.commons.math3.distribution.BinomialDistribution;
import org.apache.commons.math3.stat.inference.ChiSquareTest;
import org.junit.jupiter.api.Test;

class WorstSegmentTest {

    private static final long SEED = 1979;
    private static final double[] EVEN = {1, 1};

    /** Relative, in p; the chi-square tail has some digits less than a double. */
    private static final double TAIL = 1e-11;

    /** Mendel's seven crosses with a 3 to 1 split (1866; counts recalled from memory) as seven segments. */
    @Test
    void findsMendelsWorstCross() {
        Map<String, long[]> crosses = new HashMap<>();
        double largest = 0;
        double p = 1;
        for (Row row : ReferenceTable.read("srm_chisq.csv").rows().toList()) {
            if (row.text("case_id").startsWith("mendel") && row.text("ratio").equals("3 1")) {
                crosses.put(row.text("case_id"), row.counts("observed"));
                if (row.number("chi_square") > largest) {
                    largest = row.number("chi_square");
                    p = row.number("p_value");
                }
            }
        }
        WorstSegment found = WorstSegment.of(new double[] {3, 1}, crosses).orElseThrow();
        assertEquals(crosses.size(), found.judged());
        assertTrue(crosses.size() >= 4, "crosses in the reference");
        assertEquals(largest, found.split().chiSquare(), 1e-12);
        assertEquals(Math.min(1, crosses.size() * p), found.adjustedPValue(), TAIL);
    }

    /** Commons Math's chi-square test as the oracle. */
    @Test
    void adjustsForTheNumberOfSegments() {
        Map<String, long[]> ports = Map.of(
                "harbour", new long[] {5050, 4950},
                "island", new long[] {2210, 2000},
                "night", new long[] {130, 118},
                "few", new long[] {4, 0});
        WorstSegment found = WorstSegment.of(EVEN, ports).orElseThrow();
        assertEquals("island", found.segment());
        assertEquals(3, found.judged());
        double p = new ChiSquareTest().chiSquareTest(EVEN, new long[] {2210, 2000});
        assertEquals(3 * p, found.adjustedPValue(), TAIL);
    }

    @Test
    void ranksByChiSquareWhereProbabilitiesUnderflow() {
        Map<String, long[]> segments = Map.of("a", new long[] {10_000, 0}, "b", new long[] {0, 20_000});
        WorstSegment found = WorstSegment.of(EVEN, segments).orElseThrow();
        assertEquals("b", found.segment());
        assertEquals(0, found.adjustedPValue());
    }

    @Test
    void isEmptyWithoutEnoughCounts() {
        assertTrue(WorstSegment.of(EVEN, Map.of()).isEmpty());
        assertTrue(WorstSegment.of(EVEN, Map.of("few", new long[] {9, 0})).isEmpty());
        assertEquals(
                1,
                WorstSegment.of(EVEN, Map.of("ten", new long[] {5, 5}))
                        .orElseThrow()
                        .adjustedPValue());
    }

    /** Twenty segments without a mismatch, and one with: seldom a false alarm, seldom the wrong segment. */
    @Test
    void seldomNamesASegmentWrongly() {
        int runs = 1000;
        int alarms = 0;
        int right = 0;
        BinomialDistribution fair = new BinomialDistribution(null, 500, 0.5);
        BinomialDistribution off = new BinomialDistribution(null, 500, 0.62);
        Random random = new Random(SEED);
        for (int run = 0; run < runs; run++) {
            Map<String, long[]> segments = new HashMap<>();
            for (int i = 0; i < 20; i++) {
                segments.put("segment " + (char) ('a' + i), draw(fair, random));
            }
            alarms += WorstSegment.of(EVEN, segments).orElseThrow().adjustedPValue() <= 0.05 ? 1 : 0;
            segments.put("segment k", draw(off, random));
            WorstSegment found = WorstSegment.of(EVEN, segments).orElseThrow();
            right += found.segment().equals("segment k") && found.adjustedPValue() <= 0.05 ? 1 : 0;
        }
        // three standard deviations above 0.05
        assertTrue(alarms <= 0.071 * runs, "seed " + SEED + ": " + alarms + " false alarms");
        assertTrue(right >= 0.98 * runs, "seed " + SEED + ": " + right + " found");
    }

    @Test
    void refusesCountsThatCannotBe() {
        for (long[] counts : List.of(new long[] {1, -1}, new long[] {1}, new long[3])) {
            assertThrows(IllegalArgumentException.class, () -> WorstSegment.of(EVEN, Map.of("s", counts)));
        }
        assertThrows(IllegalArgumentException.class, () -> WorstSegment.of(new double[] {1}, Map.of()));
    }

    private static long[] draw(BinomialDistribution law, Random random) {
        int first = law.inverseCumulativeProbability(random.nextDouble());
        return new long[] {first, law.getNumberOfTrials() - first};
    }
}
