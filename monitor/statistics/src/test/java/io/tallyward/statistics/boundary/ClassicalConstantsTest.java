package io.tallyward.statistics.boundary;

import static org.junit.jupiter.api.Assertions.assertArrayEquals;
import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertThrows;

import io.tallyward.statistics.ReferenceTable;
import io.tallyward.statistics.ReferenceTable.Row;
import io.tallyward.statistics.distribution.Normal;
import io.tallyward.statistics.spending.SpendingFunction;
import java.util.List;
import java.util.function.ToDoubleFunction;
import org.junit.jupiter.api.Test;

class ClassicalConstantsTest {

    /** Absolute; half a unit of the last digit of the reference, which prints 12. */
    private static final double CONSTANT = 6e-12;

    /** Absolute; drifts are solved to 1e-11. */
    private static final double DRIFT = 1e-10;

    /** Absolute; the reference recursions agree to 1e-12, and constants move it by less than that. */
    private static final double PROBABILITY = 2e-12;

    /** Boundaries of bhat.csv are printed with 13 digits of numbers below 6. */
    private static final double BOUNDARY = 1e-11;

    @Test
    void agreesWithIndependentRecursions() {
        ReferenceTable.read("classical_constants.csv").rows().forEach(row -> {
            int looks = (int) row.count("K");
            double alpha = row.number("alpha_two_sided");
            String where = looks + " looks at " + alpha;
            assertEquals(
                    row.number("pocock_constant"), ClassicalConstants.POCOCK.constant(looks, alpha), CONSTANT, where);
            assertEquals(
                    row.number("obrien_fleming_constant"),
                    ClassicalConstants.OBRIEN_FLEMING.constant(looks, alpha),
                    CONSTANT,
                    where);
        });
    }

    /** Jennison and Turnbull (2000), tables 2.1 and 2.3, five looks, three decimals; recalled from memory. */
    @Test
    void agreesWithPublishedTables() {
        assertEquals(2.413, ClassicalConstants.POCOCK.constant(5, 0.05), 5e-4);
        assertEquals(2.040, ClassicalConstants.OBRIEN_FLEMING.constant(5, 0.05), 5e-4);
        assertEquals(2.122, ClassicalConstants.POCOCK.constant(5, 0.10), 5e-4);
        assertEquals(2.621, ClassicalConstants.OBRIEN_FLEMING.constant(5, 0.01), 5e-4);
    }

    @Test
    void hasTheExitProbabilitiesAndTheDriftOfTheReference() {
        ReferenceTable.read("power_and_drift.csv")
                .rows()
                .filter(row -> row.text("family").startsWith("C"))
                .forEach(ClassicalConstantsTest::assertPower);
    }

    private static void assertPower(Row row) {
        ClassicalConstants test =
                row.text("family").equals("CPOCOCK") ? ClassicalConstants.POCOCK : ClassicalConstants.OBRIEN_FLEMING;
        double alpha = row.number("alpha");
        List<Look> looks = test.looks(row.numbers("information_fractions").length, alpha);
        double[] t = values(looks, Look::information);
        double[] upper = values(looks, Look::upper);
        String where = row.text("design_id") + ", drift " + row.text("theta");
        assertArrayEquals(row.numbers("information_fractions"), t, where);
        assertArrayEquals(row.numbers("z_boundaries"), upper, CONSTANT, where);
        assertEquals(alpha / 2, looks.get(looks.size() - 1).upperSpent(), PROBABILITY, where);
        ExitProbabilities exits = ExitProbabilities.of(t, upper, values(looks, Look::lower), row.number("theta"));
        assertArrayEquals(row.numbers("exit_upper_by_look"), exits.upper(), PROBABILITY, where);
        assertArrayEquals(row.numbers("exit_lower_by_look"), exits.lower(), PROBABILITY, where);
        if (row.has("target_power")) {
            double drift = test.drift(looks.size(), alpha, row.number("target_power"));
            assertEquals(row.number("theta"), drift, DRIFT, where);
        }
    }

    /** The Beta-Blocker Heart Attack Trial: published statistics, recalled from memory; it stopped at its sixth look. */
    @Test
    void stopsTheHeartAttackTrialWhereItStopped() {
        double[] classical = ClassicalConstants.OBRIEN_FLEMING.boundaries(7, 0.05);
        List<Row> rows = ReferenceTable.read("bhat.csv").rows().toList();
        BoundarySequence sequence = new BoundarySequence();
        for (Row row : rows) {
            int look = (int) row.count("look");
            double t = row.number("information_fraction_planned");
            double spent = SpendingFunction.obrienFlemingType().spent(0.025, t);
            Look spending = sequence.next(t, spent, spent);
            String where = "look " + look;
            assertEquals(row.number("z_boundary_obrien_fleming_classical"), classical[look - 1], BOUNDARY, where);
            assertEquals(row.number("z_boundary_obf_type_spending"), spending.upper(), BOUNDARY, where);
            if (row.has("observed_logrank_z")) {
                double z = row.number("observed_logrank_z");
                assertEquals(Boolean.parseBoolean(row.text("crosses_classical")), z >= classical[look - 1], where);
                assertEquals(Boolean.parseBoolean(row.text("crosses_spending")), z >= spending.upper(), where);
                assertEquals(look == 6, z >= classical[look - 1], where);
            }
        }
    }

    @Test
    void isTheFixedSampleTestForASingleLook() {
        for (ClassicalConstants test : ClassicalConstants.values()) {
            assertEquals(Normal.upperQuantile(0.025), test.constant(1, 0.05));
            assertEquals(Normal.upperQuantile(0.025) + Normal.quantile(0.8), test.drift(1, 0.05, 0.8), DRIFT);
        }
    }

    @Test
    void refusesWhatHasNoConstant() {
        for (ClassicalConstants test : ClassicalConstants.values()) {
            for (int looks : new int[] {-1, 0, ClassicalConstants.MOST_LOOKS + 1}) {
                assertThrows(IllegalArgumentException.class, () -> test.constant(looks, 0.05));
            }
            for (double alpha : new double[] {0, 1e-13, 0.51, 1, Double.NaN}) {
                assertThrows(IllegalArgumentException.class, () -> test.constant(3, alpha));
            }
            for (double power : new double[] {0.025, 0.01, 1, Double.NaN}) {
                assertThrows(IllegalArgumentException.class, () -> test.drift(3, 0.05, power));
            }
        }
    }

    private static double[] values(List<Look> looks, ToDoubleFunction<Look> value) {
        return looks.stream().mapToDouble(value).toArray();
    }
}
