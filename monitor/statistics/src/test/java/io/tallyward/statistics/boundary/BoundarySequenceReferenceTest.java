package io.tallyward.statistics.boundary;

import static org.junit.jupiter.api.Assertions.assertEquals;

import io.tallyward.statistics.ReferenceTable;
import io.tallyward.statistics.ReferenceTable.Row;
import io.tallyward.statistics.spending.SpendingFunction;
import java.util.List;
import org.junit.jupiter.api.Test;

/** Boundaries against independent recursions and published tables; see the README beside the reference files. */
class BoundarySequenceReferenceTest {

    /** The independent recursions agree among themselves to 6e-14 in z; this leaves room for other processors' rounding. */
    private static final double Z = 1e-11;

    /** Relative; 1e-16 in the quantile of the level is 1e-13 in the tail thirty standard deviations out. */
    private static final double SPENT = 1e-12;

    /** Published boundaries are printed with three decimals. */
    private static final double PRINTED = 5e-4;

    @Test
    void agreesWithIndependentRecursions() {
        ReferenceTable.read("spending_boundaries.csv")
                .by("design_id")
                .forEach((design, rows) -> follow(design, rows, "information_fraction", "information_fraction"));
    }

    @Test
    void agreesWhereSpendingFollowsAnotherClockThanInformation() {
        ReferenceTable.read("spending_time.csv")
                .by("design_id")
                .forEach((design, rows) -> follow(design, rows, "information_relative_to_plan", "spending_time"));
    }

    /** Five equal looks, two-sided 0.05: the usual textbook example of this spending function, recalled from memory. */
    @Test
    void agreesWithPublishedBoundaries() {
        double[] published = {4.877, 3.357, 2.680, 2.290, 2.031};
        BoundarySequence sequence = new BoundarySequence();
        for (int k = 1; k <= 5; k++) {
            double spent = SpendingFunction.obrienFlemingType().spent(0.025, k / 5.0);
            assertEquals(published[k - 1], sequence.next(k / 5.0, spent, spent).upper(), PRINTED, "look " + k);
        }
    }

    private static void follow(String design, List<Row> rows, String informationColumn, String clockColumn) {
        BoundarySequence sequence = new BoundarySequence();
        for (Row row : rows) {
            boolean twoSided = ReferenceFamily.twoSided(row);
            double spent = ReferenceFamily.of(row).spent(ReferenceFamily.tailLevel(row), row.number(clockColumn));
            double expectedSpent = row.number("cumulative_alpha_spent") / (twoSided ? 2 : 1);
            String where = design + " look " + row.text("look");
            assertEquals(expectedSpent, spent, SPENT * expectedSpent, where);
            Look look = sequence.next(row.number(informationColumn), spent, twoSided ? spent : 0);
            assertEquals(row.number("z_boundary"), look.upper(), Z, where);
            assertEquals(twoSided ? -look.upper() : Double.NEGATIVE_INFINITY, look.lower(), where);
        }
    }
}
