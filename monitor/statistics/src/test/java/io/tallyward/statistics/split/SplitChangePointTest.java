package io.tallyward.statistics.split;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertThrows;
import static org.junit.jupiter.api.Assertions.assertTrue;

import java.util.ArrayList;
import java.util.List;
import java.util.Random;
import org.apache.commons.math3.distribution.ChiSquaredDistribution;
import org.junit.jupiter.api.Test;

class SplitChangePointTest {

    private static final long SEED = 1970;

    /** Relative to the largest term, which the oracle lets cancel. */
    private static final double ROUNDING = 1e-12;

    private static final double[] EVEN = {1, 1};

    @Test
    void findsTheWindowWhereAFlawlessSplitBreaks() {
        List<long[]> windows = new ArrayList<>();
        for (int i = 0; i < 20; i++) {
            windows.add(i < 13 ? new long[] {500, 500} : new long[] {560, 440});
        }
        SplitChangePoint found = SplitChangePoint.of(EVEN, windows).orElseThrow();
        assertEquals(13, found.window());
        assertEquals(List.of(0.56, 0.44), found.sharesAfter());
        double expected = 7 * (560 * Math.log(1.12) + 440 * Math.log(0.88));
        assertEquals(expected, found.logLikelihoodGain(), ROUNDING * 1000);
    }

    /** The definition with plain logarithms, for every window, largest first. */
    @Test
    void takesTheLargestGain() {
        Random random = new Random(SEED);
        double[] shares = {0.5, 0.3, 0.2};
        for (int run = 0; run < 200; run++) {
            List<long[]> windows = new ArrayList<>();
            for (int i = 0; i < 15; i++) {
                windows.add(new long[] {random.nextInt(60), random.nextInt(40), random.nextInt(9)});
            }
            SplitChangePoint found = SplitChangePoint.of(shares, windows).orElseThrow();
            String where = "seed " + SEED + ", run " + run;
            double largest = Double.NEGATIVE_INFINITY;
            int at = -1;
            for (int window = 0; window < windows.size(); window++) {
                double gain = plainGain(shares, windows.subList(window, windows.size()));
                if (gain > largest) {
                    largest = gain;
                    at = window;
                }
            }
            assertEquals(at, found.window(), where);
            assertEquals(largest, found.logLikelihoodGain(), ROUNDING * 1000, where);
        }
    }

    /** A window of 2000 units that is off by two points gains 1.6: the place is found within a few windows. */
    @Test
    void isNearTheTrueWindowWhateverItIs() {
        Random random = new Random(SEED);
        for (int change : new int[] {0, 10, 30, 45}) {
            int runs = 100;
            int exact = 0;
            int near = 0;
            for (int run = 0; run < runs; run++) {
                List<long[]> windows = sequence(random, 50, change, 2000, 0.5, 0.52);
                int miss = Math.abs(
                        SplitChangePoint.of(EVEN, windows).orElseThrow().window() - change);
                exact += miss == 0 ? 1 : 0;
                near += miss <= 3 ? 1 : 0;
            }
            String where = "seed " + SEED + ", change at " + change + ": exact " + exact + ", near " + near;
            assertTrue(exact >= 0.4 * runs && near >= 0.85 * runs, where);
        }
    }

    @Test
    void findsALargeChangeExactly() {
        Random random = new Random(SEED);
        for (int run = 0; run < 100; run++) {
            List<long[]> windows = sequence(random, 30, run % 30, 2000, 0.5, 0.6);
            assertEquals(
                    run % 30,
                    SplitChangePoint.of(EVEN, windows).orElseThrow().window(),
                    "seed " + SEED + ", run " + run);
        }
    }

    /** Without a mismatch gains stay below what fifty tests at a thousandth each would let pass. */
    @Test
    void gainsLittleWithoutAMismatch() {
        Random random = new Random(SEED);
        double limit = 0.5 * new ChiSquaredDistribution(1).inverseCumulativeProbability(1 - 0.001 / 50);
        int runs = 200;
        int beyond = 0;
        for (int run = 0; run < runs; run++) {
            List<long[]> windows = sequence(random, 50, 50, 1000, 0.5, 0.5);
            beyond += SplitChangePoint.of(EVEN, windows).orElseThrow().logLikelihoodGain() > limit ? 1 : 0;
        }
        assertTrue(beyond <= 2, "seed " + SEED + ": " + beyond + " of " + runs);
    }

    @Test
    void staysExactForTrillions() {
        long n = 1_000_000_000_000L;
        long gap = 3_000_000;
        List<long[]> windows = List.of(new long[] {n, n}, new long[] {n + gap, n - gap});
        SplitChangePoint found = SplitChangePoint.of(EVEN, windows).orElseThrow();
        assertEquals(1, found.window());
        // half of Pearson's chi-square; the next term is 1e-11 of it
        assertEquals((double) gap * gap / n, found.logLikelihoodGain(), 1e-9);
    }

    @Test
    void isEmptyWithoutCountsAndSkipsEmptyWindows() {
        assertTrue(SplitChangePoint.of(EVEN, List.of()).isEmpty());
        assertTrue(SplitChangePoint.of(EVEN, List.of(new long[2], new long[2])).isEmpty());
        List<long[]> windows = List.of(new long[] {50, 50}, new long[2], new long[] {90, 10}, new long[2]);
        assertEquals(2, SplitChangePoint.of(EVEN, windows).orElseThrow().window());
    }

    @Test
    void refusesCountsThatCannotBe() {
        long most = 1L << 53;
        assertThrows(IllegalArgumentException.class, () -> SplitChangePoint.of(EVEN, List.of(new long[] {1, -1})));
        assertThrows(IllegalArgumentException.class, () -> SplitChangePoint.of(EVEN, List.of(new long[] {1, 1, 1})));
        assertThrows(
                IllegalArgumentException.class,
                () -> SplitChangePoint.of(EVEN, List.of(new long[] {most, 0}, new long[] {1, 0})));
        assertThrows(
                IllegalArgumentException.class,
                () -> SplitChangePoint.of(new double[] {1e308, 1e308}, List.of(new long[] {1, 1})));
    }

    private static List<long[]> sequence(
            Random random, int windows, int change, int units, double before, double after) {
        List<long[]> counts = new ArrayList<>();
        for (int window = 0; window < windows; window++) {
            double share = window < change ? before : after;
            long first = 0;
            for (int unit = 0; unit < units; unit++) {
                first += random.nextDouble() < share ? 1 : 0;
            }
            counts.add(new long[] {first, units - first});
        }
        return counts;
    }

    private static double plainGain(double[] shares, List<long[]> windows) {
        double gain = 0;
        double total = windows.stream().mapToDouble(Shares::total).sum();
        for (int i = 0; i < shares.length; i++) {
            int cell = i;
            double n = windows.stream().mapToDouble(w -> w[cell]).sum();
            gain += n == 0 ? 0 : n * Math.log(n / (total * shares[i]));
        }
        return total == 0 ? 0 : gain;
    }
}
