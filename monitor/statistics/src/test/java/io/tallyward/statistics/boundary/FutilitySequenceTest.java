package io.tallyward.statistics.boundary;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertThrows;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.statistics.ReferenceTable;
import io.tallyward.statistics.ReferenceTable.Row;
import io.tallyward.statistics.distribution.Normal;
import java.util.List;
import org.junit.jupiter.api.Test;

class FutilitySequenceTest {

    /** The drift is printed with 13 digits, which early bounds multiply by less than 10. */
    private static final double BOUND = 1e-10;

    @Test
    void agreesWithIndependentRecursions() {
        ReferenceTable.read("futility.csv").by("design_id").forEach((name, rows) -> {
            FutilitySequence sequence = new FutilitySequence(rows.get(0).number("theta"));
            for (Row row : rows) {
                double bound = sequence.next(
                        row.number("information_fraction"),
                        row.number("z_efficacy"),
                        row.number("cumulative_beta_spent"));
                assertEquals(row.number("z_futility"), bound, BOUND, name + " look " + row.text("look"));
            }
            assertEquals(rows.get(0).number("power"), sequence.power(), BOUND, name);
        });
    }

    @Test
    void continuesBitForBitAfterResuming() {
        double[] t = {0.2, 0.22, 0.5, 0.9, 1.1};
        double[] upper = {Double.POSITIVE_INFINITY, 4, 2.9, 2.2, 2.1};
        double[] beta = {0, 0.01, 0.05, 0.12, 0.2};
        FutilitySequence whole = new FutilitySequence(3);
        double[] bounds = new double[t.length];
        for (int k = 0; k < t.length; k++) {
            bounds[k] = whole.next(t[k], upper[k], beta[k]);
        }
        for (int cut = 1; cut < t.length; cut++) {
            FutilitySequence resumed = new FutilitySequence(3);
            for (int k = 0; k < t.length; k++) {
                if (k < cut) {
                    resumed.resume(t[k], upper[k], beta[k], bounds[k]);
                } else {
                    assertEquals(bounds[k], resumed.next(t[k], upper[k], beta[k]), 0.0, "cut after " + cut);
                }
            }
            assertEquals(whole.power(), resumed.power());
        }
    }

    @Test
    void givesNoBoundBeforeAnythingIsSpent() {
        FutilitySequence sequence = new FutilitySequence(2.8);
        assertEquals(Double.NEGATIVE_INFINITY, sequence.next(0.3, 3, 0));
        double first = sequence.next(0.5, 2.8, 0.01);
        assertTrue(first > -1 && first < 2.8);
        assertEquals(Double.NEGATIVE_INFINITY, sequence.next(0.6, 2.5, 0.01));
    }

    @Test
    void isAQuantileAtTheFirstLook() {
        // Z is normal with mean drift sqrt(t) = 1.5.
        assertEquals(1.5 + Normal.quantile(0.02), new FutilitySequence(3).next(0.25, 5, 0.02), BOUND);
    }

    @Test
    void neverExceedsTheEfficacyBoundary() {
        FutilitySequence sequence = new FutilitySequence(0.5);
        assertEquals(1.0, sequence.next(0.5, 1.0, 0.95));
        // Nothing is left running, so whatever is below the efficacy boundary is futile.
        assertEquals(1.1, sequence.next(0.8, 1.1, 0.97));
        assertEquals(1.2, sequence.next(1.0, 1.2, 0.98));
    }

    @Test
    void refusesALookThatDoesNotFollow() {
        assertThrows(IllegalArgumentException.class, () -> new FutilitySequence(0));
        assertThrows(IllegalArgumentException.class, () -> new FutilitySequence(Double.NaN));
        FutilitySequence sequence = new FutilitySequence(3);
        sequence.next(0.5, 2.9, 0.05);
        List<Runnable> refused = List.of(
                () -> sequence.next(0.5, 2.9, 0.06),
                () -> sequence.next(0.6, Double.NaN, 0.06),
                () -> sequence.next(0.6, 2.9, 0.04),
                () -> sequence.next(0.6, 2.9, 1),
                () -> sequence.resume(0.6, 2.9, 0.06, 3.0),
                () -> sequence.resume(0.6, 2.9, 0.06, Double.NaN));
        refused.forEach(call -> assertThrows(IllegalArgumentException.class, call::run));
        assertEquals(1, sequence.looks());
    }
}
