package io.tallyward.statistics.boundary;

import static org.junit.jupiter.api.Assertions.assertArrayEquals;
import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertThrows;

import io.tallyward.statistics.ReferenceTable;
import io.tallyward.statistics.ReferenceTable.Row;
import io.tallyward.statistics.distribution.Normal;
import java.util.Arrays;
import java.util.Random;
import java.util.function.DoubleUnaryOperator;
import org.junit.jupiter.api.Test;

class ExitProbabilitiesTest {

    /** Absolute; the reference recursions agree to 1e-12 and their boundaries are printed with 15 digits. */
    private static final double PROBABILITY = 2e-12;

    /** Constants are printed with 12 digits; their error times the density at the boundary. */
    private static final double LEVEL = 5e-12;

    /** Published error rates are printed with three decimals. */
    private static final double PRINTED = 5e-4;

    /** Absolute; rounding of 1e-15 over twice 1e-3, and a fifth derivative below 10. */
    private static final double SLOPE = 5e-12;

    private static final long SEED = 7;

    @Test
    void agreesWithIndependentRecursionsUnderAnyDrift() {
        ReferenceTable.read("power_and_drift.csv").rows().forEach(row -> {
            double[] t = row.numbers("information_fractions");
            double[] upper = row.numbers("z_boundaries");
            double theta = row.number("theta");
            double[] lower = ReferenceFamily.twoSided(row) ? negated(upper) : none(upper);
            assertAgrees(row, ExitProbabilities.of(t, upper, lower, theta));
            assertAgrees(row, ExitProfile.of(t, upper, lower, -5, 5).at(theta));
        });
    }

    private static void assertAgrees(Row row, ExitProbabilities exits) {
        String where = row.text("design_id") + ", drift " + row.text("theta");
        assertArrayEquals(row.numbers("exit_upper_by_look"), exits.upper(), PROBABILITY, where);
        assertArrayEquals(row.numbers("exit_lower_by_look"), exits.lower(), PROBABILITY, where);
        assertEquals(row.number("prob_upper"), exits.totalUpper(), PROBABILITY, where);
        assertEquals(row.number("prob_lower"), exits.totalLower(), PROBABILITY, where);
        assertEquals(row.number("expected_fraction_at_theta"), exits.expectedInformation(), PROBABILITY, where);
    }

    @Test
    void givesTheClassicalConstantsTheirLevel() {
        ReferenceTable.read("classical_constants.csv").rows().forEach(row -> {
            int looks = (int) row.count("K");
            double alpha = row.number("alpha_two_sided");
            double[] t = equalLooks(looks);
            double[] pocock = new double[looks];
            Arrays.fill(pocock, row.number("pocock_constant"));
            double[] falling = Arrays.stream(t)
                    .map(x -> row.number("obrien_fleming_constant") / Math.sqrt(x))
                    .toArray();
            String where = looks + " looks at " + alpha;
            assertEquals(alpha, bothTails(t, pocock), LEVEL, "Pocock, " + where);
            assertEquals(alpha, bothTails(t, falling), LEVEL, "O'Brien-Fleming, " + where);
        });
    }

    /** Armitage, McPherson and Rowe (1969), recalled from memory, and the same to more digits. */
    @Test
    void agreesWithTheErrorOfRepeatedTestsAtAFixedLevel() {
        ReferenceTable.read("simulated_oc.csv").rows().forEach(row -> {
            int looks = (int) row.count("looks");
            double[] constant = new double[looks];
            Arrays.fill(constant, row.number("z_critical"));
            double error = bothTails(equalLooks(looks), constant);
            String where = looks + " looks at " + row.text("nominal_alpha_two_sided");
            // 200 looks multiply the 12 printed digits of the critical value.
            assertEquals(row.number("type1_error_exact"), error, 10 * LEVEL, where);
            if (row.has("published_armitage_1969_recalled")) {
                assertEquals(row.number("published_armitage_1969_recalled"), error, PRINTED, where);
            }
        });
    }

    @Test
    void addsUpToOneWhenTheLastBoundariesMeet() {
        double[] t = {0.2, 0.23, 0.5, 1};
        double[] upper = {4, Double.POSITIVE_INFINITY, 2.8, 1.2};
        double[] lower = {-3, -2.5, Double.NEGATIVE_INFINITY, 1.2};
        for (double drift : new double[] {-40, -3, 0, 2.8, 15, 120}) {
            ExitProbabilities exits = ExitProbabilities.of(t, upper, lower, drift);
            assertEquals(1, exits.totalUpper() + exits.totalLower(), PROBABILITY, "drift " + drift);
        }
    }

    @Test
    void mirrorsItselfUnderTheOppositeDrift() {
        Random random = new Random(SEED);
        for (int run = 0; run < 50; run++) {
            double[] t = {0.1 + 0.2 * random.nextDouble(), 0.4 + 0.3 * random.nextDouble(), 1};
            double[] upper = {2 + random.nextDouble(), 1.5 + random.nextDouble(), 1 + random.nextDouble()};
            double[] lower = {-3 * random.nextDouble(), -2 * random.nextDouble(), -random.nextDouble()};
            double drift = 6 * random.nextDouble() - 3;
            ExitProbabilities exits = ExitProbabilities.of(t, upper, lower, drift);
            ExitProbabilities mirrored = ExitProbabilities.of(t, negated(lower), negated(upper), -drift);
            assertArrayEquals(exits.upper(), mirrored.lower(), PROBABILITY, "seed " + SEED + ", run " + run);
            assertArrayEquals(exits.lower(), mirrored.upper(), PROBABILITY, "seed " + SEED + ", run " + run);
        }
    }

    /** The slopes against differences of fourth order, whose own error is some 1e-12. */
    @Test
    void profileKnowsTotalsAndTheirSlopes() {
        double[] t = {0.2, 0.23, 0.5, 1};
        double[] upper = {4, Double.POSITIVE_INFINITY, 2.8, 2};
        double[] lower = {-3, -2.5, Double.NEGATIVE_INFINITY, -1.2};
        ExitProfile profile = ExitProfile.of(t, upper, lower, -6, 6);
        for (double drift : new double[] {-4, -0.3, 0, 2.8, 5}) {
            ExitProbabilities exits = ExitProbabilities.of(t, upper, lower, drift);
            String where = "drift " + drift;
            assertEquals(exits.totalUpper(), profile.upward(drift).probability(), PROBABILITY, where);
            assertEquals(exits.totalLower(), profile.downward(drift).probability(), PROBABILITY, where);
            double up = slope(theta -> profile.upward(theta).probability(), drift);
            double down = slope(theta -> profile.downward(theta).probability(), drift);
            assertEquals(up, profile.upward(drift).slope(), SLOPE, where);
            assertEquals(down, profile.downward(drift).slope(), SLOPE, where);
        }
    }

    private static double slope(DoubleUnaryOperator of, double at) {
        double h = 1e-3;
        double near = of.applyAsDouble(at + h) - of.applyAsDouble(at - h);
        double far = of.applyAsDouble(at + 2 * h) - of.applyAsDouble(at - 2 * h);
        return (8 * near - far) / (12 * h);
    }

    @Test
    void reducesToTheNormalLawForASingleLook() {
        ExitProbabilities exits = ExitProbabilities.of(new double[] {0.5}, new double[] {2}, new double[] {-1}, 3);
        assertEquals(Normal.survival(2 - 3 * Math.sqrt(0.5)), exits.totalUpper(), PROBABILITY);
        assertEquals(Normal.cdf(-1 - 3 * Math.sqrt(0.5)), exits.totalLower(), PROBABILITY);
        assertEquals(0.5, exits.expectedInformation());
    }

    @Test
    void refusesBoundariesThatCrossOrLooksThatDoNotAscend() {
        double[] one = {1};
        assertThrows(
                IllegalArgumentException.class,
                () -> ExitProbabilities.of(one, new double[] {-2}, new double[] {2}, 0));
        assertThrows(IllegalArgumentException.class, () -> ExitProbabilities.of(one, one, new double[] {0, 0}, 0));
        assertThrows(
                IllegalArgumentException.class,
                () -> ExitProbabilities.of(new double[] {1, 1}, new double[] {2, 2}, new double[] {-2, -2}, 0));
        assertThrows(
                IllegalArgumentException.class, () -> ExitProbabilities.of(one, one, new double[] {0}, Double.NaN));
        assertThrows(IllegalArgumentException.class, () -> ExitProfile.of(one, one, one, 0, 26));
    }

    private static double bothTails(double[] t, double[] upper) {
        ExitProbabilities exits = ExitProbabilities.of(t, upper, negated(upper), 0);
        return exits.totalUpper() + exits.totalLower();
    }

    private static double[] equalLooks(int looks) {
        double[] t = new double[looks];
        for (int k = 0; k < looks; k++) {
            t[k] = (k + 1.0) / looks;
        }
        return t;
    }

    private static double[] negated(double[] values) {
        return Arrays.stream(values).map(x -> -x).toArray();
    }

    private static double[] none(double[] values) {
        double[] none = new double[values.length];
        Arrays.fill(none, Double.NEGATIVE_INFINITY);
        return none;
    }
}
