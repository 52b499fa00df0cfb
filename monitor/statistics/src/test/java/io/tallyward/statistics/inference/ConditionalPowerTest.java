package io.tallyward.statistics.inference;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertThrows;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.statistics.ReferenceTable;
import io.tallyward.statistics.ReferenceTable.Row;
import io.tallyward.statistics.boundary.Look;
import io.tallyward.statistics.distribution.Normal;
import java.util.Arrays;
import java.util.List;
import java.util.Random;
import org.apache.commons.math3.analysis.integration.IterativeLegendreGaussIntegrator;
import org.junit.jupiter.api.Test;

class ConditionalPowerTest {

    private static final long SEED = 1982;

    /** Absolute; the reference is trusted to 1e-12 and its drifts are printed with 13 digits. */
    private static final double PROBABILITY = 2e-12;

    /** Absolute; what the integrator over the drift is asked for. */
    private static final double INTEGRATED = 1e-10;

    @Test
    void agreesWithClosedFormsAndIndependentRecursions() {
        ReferenceTable.read("conditional_power.csv").rows().forEach(row -> {
            double[] upper = row.numbers("remaining_z_boundaries");
            ConditionalPower power = ConditionalPower.of(
                    row.number("interim_fraction"),
                    row.number("interim_z"),
                    row.numbers("remaining_fractions"),
                    upper,
                    none(upper));
            String where = row.text("case_id") + " " + row.text("drift_assumption");
            assertEquals(row.number("value"), asked(power, row), PROBABILITY, where);
        });
    }

    private static double asked(ConditionalPower power, Row row) {
        return switch (row.text("drift_assumption")) {
            case "null" -> power.withoutEffect();
            case "design" -> power.under(row.number("theta_used"));
            case "trend" -> {
                assertEquals(row.number("theta_used"), power.trend(), 1e-11, row.text("case_id"));
                yield power.underTrend();
            }
            case "posterior" -> power.predictive();
            default -> throw new IllegalArgumentException("drift_assumption: " + row.text("drift_assumption"));
        };
    }

    /** The change of clock against what it replaces: the average of conditional power over the posterior. */
    @Test
    void predictsWhatConditionalPowerAveragesTo() {
        Random random = new Random(SEED);
        IterativeLegendreGaussIntegrator integrator = new IterativeLegendreGaussIntegrator(20, 1e-12, 1e-12, 3, 20);
        for (int run = 0; run < 10; run++) {
            double t = 0.2 + 0.4 * random.nextDouble();
            double[] remaining = {t + 0.05 + 0.1 * random.nextDouble(), t + 0.2, t + 0.3 + 0.3 * random.nextDouble()};
            double[] upper = {2 + random.nextDouble(), 1.8 + random.nextDouble(), 1.5 + random.nextDouble()};
            double[] lower = {-1 + random.nextDouble(), Double.NEGATIVE_INFINITY, 1.4 * random.nextDouble()};
            ConditionalPower power = ConditionalPower.of(t, 3 * random.nextDouble() - 0.5, remaining, upper, lower);
            double average = integrator.integrate(
                    1_000_000, x -> Normal.density(x) * power.under(power.trend() + x / Math.sqrt(t)), -9, 9);
            assertEquals(average, power.predictive(), INTEGRATED, "seed " + SEED + ", run " + run);
        }
    }

    @Test
    void growsWithTheDriftAndTheStatistic() {
        double[] remaining = {0.7, 1};
        double[] upper = {2.6, 2};
        double last = -1;
        for (double drift = -4; drift <= 8; drift += 0.5) {
            double now =
                    ConditionalPower.of(0.5, 1, remaining, upper, none(upper)).under(drift);
            assertTrue(now > last, "drift " + drift);
            last = now;
        }
        last = -1;
        for (double z = -4; z <= 6; z += 0.5) {
            double now =
                    ConditionalPower.of(0.5, z, remaining, upper, none(upper)).predictive();
            assertTrue(now > last, "z " + z);
            last = now;
        }
    }

    @Test
    void isLoweredByABoundaryBelow() {
        double[] remaining = {0.7, 1};
        double[] upper = {2.6, 2};
        ConditionalPower free = ConditionalPower.of(0.5, 1, remaining, upper, none(upper));
        ConditionalPower stopped = ConditionalPower.of(0.5, 1, remaining, upper, new double[] {0.9, 2});
        assertTrue(stopped.under(2) < free.under(2));
        assertTrue(stopped.predictive() < free.predictive());
    }

    @Test
    void takesPlannedLooks() {
        List<Look> planned = List.of(new Look(2, 0.8, 0.01, 0.01, 2.4, -2.4), new Look(3, 1, 0.025, 0.025, 2, -2));
        double[] upper = {2.4, 2};
        ConditionalPower listed = ConditionalPower.of(0.5, 1.3, new double[] {0.8, 1}, upper, new double[] {-2.4, -2});
        assertEquals(listed.under(3), ConditionalPower.of(0.5, 1.3, planned).under(3));
    }

    @Test
    void staysAProbabilityFarOut() {
        double[] remaining = {0.7, 1};
        double[] upper = {2.6, 2};
        for (double z : new double[] {-1e6, -50, 50, 1e6}) {
            ConditionalPower power = ConditionalPower.of(0.5, z, remaining, upper, none(upper));
            assertEquals(z > 0 ? 1 : 0, power.predictive(), PROBABILITY);
            assertEquals(z > 0 ? 1 : 0, power.underTrend(), PROBABILITY);
        }
        assertEquals(
                1, ConditionalPower.of(0.5, 0, remaining, upper, none(upper)).under(1e100));
    }

    @Test
    void refusesLooksThatAreNotAhead() {
        double[] one = {1};
        List<Runnable> refused = List.of(
                () -> ConditionalPower.of(1, 2, one, one, one),
                () -> ConditionalPower.of(0, 2, one, one, one),
                () -> ConditionalPower.of(0.5, Double.NaN, one, one, one),
                () -> ConditionalPower.of(0.5, 2, one, new double[] {Double.NaN}, one),
                () -> ConditionalPower.of(0.5, 2, one, one, new double[0]),
                () -> ConditionalPower.of(0.5, 2, List.of()),
                () -> ConditionalPower.of(0.5, 2, new double[] {0.8, 0.8}, new double[] {2, 2}, new double[] {-2, -2}));
        refused.forEach(call -> assertThrows(IllegalArgumentException.class, call::run));
        double[] two = {2, 2};
        ConditionalPower early = ConditionalPower.of(1e-7, 0.1, new double[] {0.9, 1}, two, new double[] {-2, -2});
        assertTrue(early.withoutEffect() > 0);
        String message =
                assertThrows(IllegalArgumentException.class, early::predictive).getMessage();
        assertTrue(message.startsWith("information: 1.0E-7 (expected: "), message);
    }

    private static double[] none(double[] values) {
        double[] none = new double[values.length];
        Arrays.fill(none, Double.NEGATIVE_INFINITY);
        return none;
    }
}
