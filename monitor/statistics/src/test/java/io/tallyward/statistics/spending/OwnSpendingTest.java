package io.tallyward.statistics.spending;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertNotEquals;
import static org.junit.jupiter.api.Assertions.assertThrows;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.statistics.ReferenceTable;
import io.tallyward.statistics.ReferenceTable.Row;
import io.tallyward.statistics.boundary.BoundarySequence;
import io.tallyward.statistics.boundary.Look;
import io.tallyward.statistics.distribution.Normal;
import java.util.List;
import java.util.Random;
import org.junit.jupiter.api.Test;

/** Spending written down point by point, and spending that starts late. */
class OwnSpendingTest {

    private static final long SEED = 89;

    /** The reference prints spending with 15 digits; between close looks the difference keeps ten of them. */
    private static final double FROM_PRINTED_SPENDING = 1e-9;

    /** As for the families themselves. */
    private static final double Z = 1e-11;

    private static final int MOST_LOOKS = 20;

    private static final SpendingFunction TABLE =
            SpendingFunction.table(new double[] {0.25, 0.5, 0.75, 1}, new double[] {0, 0.1, 0.1, 1});

    @Test
    void runsStraightBetweenThePoints() {
        assertEquals(0, TABLE.spent(0.025, 0.2));
        assertEquals(0, TABLE.spent(0.025, 0.25));
        assertEquals(0.00125, TABLE.spent(0.025, 0.375), 1e-17);
        assertEquals(0.0025, TABLE.spent(0.025, 0.6), 1e-17);
        assertEquals(0.025 * 0.55, TABLE.spent(0.025, 0.875), 1e-17);
        assertEquals(0.025, TABLE.spent(0.025, 1));
        assertEquals(0.025, TABLE.spent(0.025, 3));
        SpendingFunction even = SpendingFunction.table(new double[] {1}, new double[] {1});
        assertEquals(SpendingFunction.kimDemets(1).spent(0.05, 0.3), even.spent(0.05, 0.3), 1e-17);
    }

    @Test
    void neverFallsAndNeverExceedsTheLevel() {
        Random random = new Random(SEED);
        for (int i = 0; i < 3000; i++) {
            SpendingFunction spending = random.nextBoolean() ? TABLE : TABLE.startingAt(random.nextDouble());
            double level = 0.3 * random.nextDouble() + 1e-6;
            double earlier = random.nextDouble();
            double later = earlier + (1 - earlier) * random.nextDouble();
            double before = spending.spent(level, earlier);
            double after = spending.spent(level, later);
            String where = "seed " + SEED + ", " + spending + ", level " + level + ", " + earlier + " to " + later;
            assertTrue(before >= 0 && before <= after && after <= level, where);
        }
    }

    /** A table of what a family has spent at the looks has the boundaries of the family. */
    @Test
    void hasTheReferenceBoundariesOfTheFamilyItWasCopiedFrom() {
        ReferenceTable.read("spending_boundaries.csv").by("design_id").forEach((design, rows) -> {
            double[] t = column(rows, "information_fraction");
            if (rows.size() <= MOST_LOOKS && t[t.length - 1] == 1) {
                double alpha = rows.get(0).number("alpha");
                double[] shares = column(rows, "cumulative_alpha_spent");
                for (int k = 0; k < shares.length; k++) {
                    shares[k] /= alpha;
                }
                shares[shares.length - 1] = 1;
                follow(design, rows, SpendingFunction.table(t, shares), FROM_PRINTED_SPENDING);
            }
        });
    }

    /** Looks that spend nothing take nothing from later ones: the boundaries are those of the later looks alone. */
    @Test
    void hasTheReferenceBoundariesOfTheLooksAfterItsStart() {
        List<String> late = List.of("late_two_0.05_OBF", "eq2_one_0.025_OBF", "eq3_two_0.01_OBF", "eq4_two_0.05_OBF");
        ReferenceTable.read("spending_boundaries.csv").by("design_id").forEach((design, rows) -> {
            if (late.contains(design)) {
                double start = rows.get(0).number("information_fraction");
                SpendingFunction delayed = SpendingFunction.obrienFlemingType().startingAt(start);
                follow(design, rows, delayed, Z, 0.2 * start, 0.5 * start, 0.99 * start);
            }
        });
    }

    private static void follow(
            String design, List<Row> rows, SpendingFunction spending, double tolerance, double... silent) {
        boolean twoSided = rows.get(0).text("side").equals("two");
        double level = rows.get(0).number("alpha") / (twoSided ? 2 : 1);
        BoundarySequence sequence = new BoundarySequence();
        for (double t : silent) {
            Look look = sequence.next(t, spending.spent(level, t), twoSided ? spending.spent(level, t) : 0);
            assertEquals(Double.POSITIVE_INFINITY, look.upper(), design);
            assertEquals(Double.NEGATIVE_INFINITY, look.lower(), design);
        }
        for (Row row : rows) {
            double t = row.number("information_fraction");
            double spent = spending.spent(level, t);
            Look look = sequence.next(t, spent, twoSided ? spent : 0);
            double expected = row.number("z_boundary");
            assertEquals(expected, look.upper(), tolerance, design + " look " + row.text("look"));
        }
    }

    @Test
    void savesTheWholeLevelForTheEndWhenItStartsThere() {
        SpendingFunction last = SpendingFunction.pocockType().startingAt(1);
        assertEquals(0, last.spent(0.025, 0.999));
        assertEquals(0.025, last.spent(0.025, 1));
        BoundarySequence sequence = new BoundarySequence();
        sequence.next(0.5, last.spent(0.025, 0.5), 0);
        assertEquals(
                Normal.upperQuantile(0.025),
                sequence.next(1, last.spent(0.025, 1), 0).upper(),
                Z);
    }

    @Test
    void isAValue() {
        assertEquals(
                SpendingFunction.table(new double[] {0.5, 1}, new double[] {0.2, 1}),
                SpendingFunction.table(new double[] {0.5, 1}, new double[] {0.2, 1}));
        assertNotEquals(TABLE, SpendingFunction.table(new double[] {1}, new double[] {1}));
        assertEquals(TABLE, TABLE.startingAt(0));
        assertEquals(TABLE.startingAt(0.5), TABLE.startingAt(0.5));
        double[] shares = {0.2, 1};
        SpendingFunction table = SpendingFunction.table(new double[] {0.5, 1}, shares);
        shares[0] = 0.9;
        assertEquals(0.2 * 0.05, table.spent(0.05, 0.5), 1e-17);
    }

    @Test
    void refusesATableOutOfOrder() {
        refuses(new double[] {}, new double[] {});
        refuses(new double[] {0.5, 1}, new double[] {1});
        refuses(new double[] {0, 1}, new double[] {0, 1});
        refuses(new double[] {0.5, 0.5, 1}, new double[] {0.1, 0.2, 1});
        refuses(new double[] {0.5, 0.4, 1}, new double[] {0.1, 0.2, 1});
        refuses(new double[] {0.5, 1.1}, new double[] {0.1, 1});
        refuses(new double[] {0.5, Double.NaN}, new double[] {0.1, 1});
        refuses(new double[] {0.5, 1}, new double[] {Double.NaN, 1});
        refuses(new double[] {0.5, 0.6, 1}, new double[] {0.2, 0.1, 1});
        refuses(new double[] {0.5, 1}, new double[] {-0.1, 1});
        refuses(new double[] {0.5, 1}, new double[] {0.1, 1.1});
        refuses(new double[] {0.5, 1}, new double[] {0.1, 0.9});
        refuses(new double[] {0.5, 0.9}, new double[] {0.1, 1});
        for (double start : new double[] {-0.1, 1.1, Double.NaN}) {
            assertThrows(IllegalArgumentException.class, () -> TABLE.startingAt(start));
        }
        SpendingFunction delayed = TABLE.startingAt(0.5);
        assertThrows(IllegalArgumentException.class, () -> delayed.spent(1, 0.1));
        assertThrows(IllegalArgumentException.class, () -> delayed.spent(0.05, Double.NaN));
    }

    private static void refuses(double[] fractions, double[] shares) {
        assertThrows(IllegalArgumentException.class, () -> SpendingFunction.table(fractions, shares));
    }

    private static double[] column(List<Row> rows, String column) {
        return rows.stream().mapToDouble(row -> row.number(column)).toArray();
    }
}
