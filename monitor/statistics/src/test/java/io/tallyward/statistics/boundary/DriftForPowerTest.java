package io.tallyward.statistics.boundary;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertThrows;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.statistics.ReferenceTable;
import io.tallyward.statistics.distribution.Normal;
import java.util.Arrays;
import org.junit.jupiter.api.Test;

class DriftForPowerTest {

    /** Absolute; drifts are solved to 1e-11 and printed with 13 digits. */
    private static final double DRIFT = 1e-10;

    @Test
    void agreesWithIndependentRecursionsForAnyBoundaries() {
        ReferenceTable.read("power_and_drift.csv")
                .rows()
                .filter(row -> row.text("row_kind").equals("target_power"))
                .forEach(row -> {
                    double[] upper = row.numbers("z_boundaries");
                    double[] lower = ReferenceFamily.twoSided(row) ? map(upper, -1) : map(upper, -1e300);
                    double drift = DriftForPower.of(
                            row.numbers("information_fractions"), upper, lower, row.number("target_power"));
                    assertEquals(row.number("theta"), drift, DRIFT, row.text("design_id"));
                });
    }

    @Test
    void findsNextToNothingNextToTheLevel() {
        double[] t = {0.5, 1};
        double[] upper = {2.5, 2};
        double[] lower = {-2.5, -2};
        double level = ExitProbabilities.of(t, upper, lower, 0).totalUpper();
        double drift = DriftForPower.of(t, upper, lower, level + 1e-9);
        assertTrue(drift > 0 && drift < 1e-6, "drift " + drift);
        assertEquals(
                Normal.quantile(0.51) - Normal.quantile(0.5),
                DriftForPower.of(new double[] {1}, new double[] {0}, new double[] {-9}, 0.51),
                DRIFT);
    }

    @Test
    void refusesAPowerThatNoDriftHas() {
        double[] one = {1};
        double[] two = {2};
        double[] below = {-2};
        double[] never = {Double.POSITIVE_INFINITY};
        double[] far = {40};
        assertThrows(IllegalArgumentException.class, () -> DriftForPower.of(one, two, below, 1));
        assertThrows(IllegalArgumentException.class, () -> DriftForPower.of(one, two, below, 0.02));
        assertThrows(IllegalArgumentException.class, () -> DriftForPower.of(one, two, below, Double.NaN));
        assertThrows(IllegalArgumentException.class, () -> DriftForPower.of(one, never, below, 0.5));
        assertThrows(IllegalArgumentException.class, () -> DriftForPower.of(one, far, below, 0.5));
        assertThrows(IllegalArgumentException.class, () -> DriftForPower.of(one, below, two, 0.5));
    }

    private static double[] map(double[] values, double factor) {
        return Arrays.stream(values).map(x -> factor * x).toArray();
    }
}
