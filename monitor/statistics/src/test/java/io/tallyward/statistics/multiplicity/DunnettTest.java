package io.tallyward.statistics.multiplicity;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertThrows;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.statistics.ReferenceTable;
import io.tallyward.statistics.ReferenceTable.Row;
import io.tallyward.statistics.distribution.Normal;
import java.util.Arrays;
import java.util.Random;
import org.junit.jupiter.api.Test;

class DunnettTest {

    /** Absolute; twelve decimals are printed. */
    private static final double CRITICAL = 1e-12;

    /** Relative, for a probability. */
    private static final double TAIL = 1e-12;

    private static final long SEED = 1955;

    @Test
    void agreesWithTheReference() {
        ReferenceTable.read("multi_arm.csv").rows().forEach(row -> {
            double alpha = row.number("alpha");
            boolean twoSided = row.text("side").equals("two");
            Dunnett dunnett = dunnett(row);
            double found = twoSided ? dunnett.twoSidedCriticalValue(alpha) : dunnett.oneSidedCriticalValue(alpha);
            String where = row.cells().toString();
            assertEquals(row.number("dunnett_critical"), found, CRITICAL, where);
            double tail = twoSided ? dunnett.twoSidedTail(found) : dunnett.oneSidedTail(found);
            assertEquals(alpha, tail, TAIL * alpha, where);
        });
    }

    /** Dunnett (1955, 1964), infinite degrees of freedom, level 0.05, two to six variants; recalled from memory. */
    @Test
    void agreesWithThePublishedTables() {
        double[] twoSided = {2.21, 2.35, 2.44, 2.51, 2.57};
        double[] oneSided = {1.92, 2.06, 2.16, 2.23, 2.29};
        for (int k = 2; k <= 6; k++) {
            double[] variants = new double[k];
            Arrays.fill(variants, 1);
            assertEquals(twoSided[k - 2], Dunnett.of(1, variants).twoSidedCriticalValue(0.05), 0.005);
            assertEquals(oneSided[k - 2], Dunnett.of(1, variants).oneSidedCriticalValue(0.05), 0.005);
        }
    }

    @Test
    void isTheNormalLawForOneVariant() {
        for (double alpha : new double[] {0.5, 0.05, 1e-3, 1e-9, 1e-50, 1e-200}) {
            double one = Normal.upperQuantile(alpha);
            double two = Normal.upperQuantile(alpha / 2);
            assertEquals(one, Dunnett.of(3, 2).oneSidedCriticalValue(alpha), CRITICAL, "alpha " + alpha);
            assertEquals(two, Dunnett.of(3, 2).twoSidedCriticalValue(alpha), CRITICAL, "alpha " + alpha);
            for (double ratio : new double[] {1e-6, 1e-3, 1, 1e3, 1e6}) {
                assertEquals(
                        alpha,
                        Dunnett.of(1, ratio).oneSidedTail(one),
                        TAIL * alpha,
                        "alpha " + alpha + ", ratio " + ratio);
            }
        }
    }

    /** With a tiny control all variants share its chance alone; with a huge one they are independent (Sidak). */
    @Test
    void liesBetweenOneComparisonAndIndependentOnes() {
        double alpha = 0.05;
        double single = Normal.upperQuantile(alpha);
        double sidak = Normal.upperQuantile(-Math.expm1(Math.log1p(-alpha) / 4));
        double[] four = {1, 1, 1, 1};
        assertEquals(single, Dunnett.of(1e-6, four).oneSidedCriticalValue(alpha), 5e-3);
        assertEquals(sidak, Dunnett.of(1e6, four).oneSidedCriticalValue(alpha), 1e-5);
        double last = single;
        for (double control : new double[] {1e-6, 1e-4, 1e-2, 1, 1e2, 1e4, 1e6}) {
            double found = Dunnett.of(control, four).oneSidedCriticalValue(alpha);
            assertTrue(found > last && found < sidak + CRITICAL, "control " + control);
            last = found;
        }
    }

    /** Two variants of unequal size by simulation: a different way altogether, if a coarse one. */
    @Test
    void agreesWithSimulation() {
        Random random = new Random(SEED);
        Dunnett dunnett = Dunnett.of(2, 1, 3);
        double critical = dunnett.twoSidedCriticalValue(0.1);
        double l1 = 1 / Math.sqrt(3);
        double l2 = 1 / Math.sqrt(1 + 2.0 / 3);
        int runs = 400_000;
        int exceeded = 0;
        for (int run = 0; run < runs; run++) {
            double u = random.nextGaussian();
            double z1 = l1 * u + Math.sqrt(1 - l1 * l1) * random.nextGaussian();
            double z2 = l2 * u + Math.sqrt(1 - l2 * l2) * random.nextGaussian();
            exceeded += Math.max(Math.abs(z1), Math.abs(z2)) > critical ? 1 : 0;
        }
        // four standard deviations of a binomial share
        assertEquals(0.1, (double) exceeded / runs, 4 * Math.sqrt(0.09 / runs), "seed " + SEED);
    }

    @Test
    void tailsReachFromOneToNothing() {
        Dunnett dunnett = Dunnett.of(1, 2, 3);
        assertEquals(1, dunnett.oneSidedTail(-1e9));
        assertEquals(1, dunnett.oneSidedTail(-39), TAIL);
        assertEquals(1, dunnett.twoSidedTail(0), TAIL);
        assertEquals(0, dunnett.twoSidedTail(1e9));
    }

    @Test
    void refusesWhatItCannotCompute() {
        assertThrows(IllegalArgumentException.class, () -> Dunnett.of(1));
        assertThrows(IllegalArgumentException.class, () -> Dunnett.of(1, new double[101]));
        assertThrows(IllegalArgumentException.class, () -> Dunnett.of(0, 1));
        assertThrows(IllegalArgumentException.class, () -> Dunnett.of(1, 1e7));
        assertThrows(IllegalArgumentException.class, () -> Dunnett.of(1, 1).oneSidedCriticalValue(0.6));
        assertThrows(IllegalArgumentException.class, () -> Dunnett.of(1, 1).twoSidedCriticalValue(0));
        assertThrows(IllegalArgumentException.class, () -> Dunnett.of(1, 1).twoSidedTail(-1));
    }

    private static Dunnett dunnett(Row row) {
        double[] allocation = row.numbers("allocation_control_first");
        return Dunnett.of(allocation[0], Arrays.copyOfRange(allocation, 1, allocation.length));
    }
}
