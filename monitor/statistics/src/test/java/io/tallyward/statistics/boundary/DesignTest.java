package io.tallyward.statistics.boundary;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertThrows;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.statistics.ReferenceTable;
import io.tallyward.statistics.ReferenceTable.Row;
import io.tallyward.statistics.distribution.Normal;
import io.tallyward.statistics.spending.SpendingFunction;
import java.util.Arrays;
import java.util.List;
import java.util.Optional;
import org.junit.jupiter.api.Test;

class DesignTest {

    /** Absolute; drifts are solved to 1e-11 and printed with 13 digits. */
    private static final double DRIFT = 1e-10;

    /** Absolute; follows from {@link #DRIFT} and slopes below 1. */
    private static final double PROBABILITY = 1e-10;

    /** Futility bounds move with the drift by a factor below 10. */
    private static final double BOUND = 1e-9;

    /** Published inflation factors are printed with three decimals. */
    private static final double PRINTED = 5e-4;

    private static final SpendingFunction LATE = SpendingFunction.obrienFlemingType();

    @Test
    void findsTheDriftForThePower() {
        ReferenceTable.read("power_and_drift.csv")
                .rows()
                .filter(row -> row.text("row_kind").equals("target_power"))
                .filter(row -> !row.text("family").startsWith("C"))
                .forEach(DesignTest::assertDrift);
    }

    private static void assertDrift(Row row) {
        Design design = Design.of(new DesignRequest(
                ReferenceFamily.tailLevel(row),
                ReferenceFamily.twoSided(row),
                ReferenceFamily.of(row),
                row.number("target_power"),
                row.numbers("information_fractions"),
                Optional.empty()));
        String where = row.text("design_id") + ", power " + row.text("target_power");
        assertEquals(row.number("theta"), design.drift(), DRIFT, where);
        assertEquals(row.number("theta_fixed_sample"), design.fixedSampleDrift(), DRIFT, where);
        assertEquals(row.number("inflation_factor"), design.inflation(), DRIFT, where);
        assertEquals(row.number("expected_fraction_at_theta"), design.expectedFraction(), PROBABILITY, where);
        assertEquals(row.number("expected_fraction_null"), design.expectedFractionWithoutEffect(), PROBABILITY, where);
    }

    @Test
    void findsTheDriftAtWhichFutilityMeetsEfficacy() {
        ReferenceTable.read("futility.csv").by("design_id").forEach(DesignTest::assertFutility);
    }

    private static void assertFutility(String name, List<Row> rows) {
        Row first = rows.get(0);
        Design design = Design.of(new DesignRequest(
                first.number("alpha_one_sided"),
                false,
                ReferenceFamily.of(first.text("efficacy_family"), first, "efficacy_parameter"),
                1 - first.number("beta"),
                rows.stream()
                        .mapToDouble(row -> row.number("information_fraction"))
                        .toArray(),
                Optional.of(ReferenceFamily.of(first.text("futility_family"), first, "futility_parameter"))));
        assertEquals(first.number("theta"), design.drift(), DRIFT, name);
        assertEquals(first.number("inflation_factor"), design.inflation(), DRIFT, name);
        assertEquals(first.number("expected_fraction_null"), design.expectedFractionWithoutEffect(), PROBABILITY, name);
        assertEquals(first.number("expected_fraction_at_theta"), design.expectedFraction(), PROBABILITY, name);
        for (Row row : rows) {
            DesignLook look = design.looks().get((int) row.count("look") - 1);
            assertEquals(row.number("z_efficacy"), look.boundaries().upper(), BOUND, name);
            assertEquals(row.number("z_futility"), look.futility(), BOUND, name + " look " + row.text("look"));
        }
    }

    /**
     * Jennison and Turnbull (2000), five looks, two-sided 0.05, power 0.9: inflation 1.207 for Pocock's test and 1.026 for
     * O'Brien and Fleming's, recalled from memory.
     */
    @Test
    void agreesWithPublishedInflationFactors() {
        ReferenceTable.read("power_and_drift.csv")
                .rows()
                .filter(row -> row.text("design_id").matches("eq5_two_0.05_(COBF|CPOCOCK)"))
                .filter(row -> row.text("target_power").equals("0.9"))
                .forEach(row -> {
                    double published = row.text("family").equals("CPOCOCK") ? 1.207 : 1.026;
                    double drift = Math.sqrt(published) * (Normal.upperQuantile(0.025) + Normal.quantile(0.9));
                    double[] upper = row.numbers("z_boundaries");
                    double[] lower = Arrays.stream(upper).map(z -> -z).toArray();
                    double power = ExitProbabilities.of(row.numbers("information_fractions"), upper, lower, drift)
                            .totalUpper();
                    // A unit in the third decimal of the inflation factor is worth 0.3 of it in power.
                    assertEquals(0.9, power, PRINTED, row.text("design_id"));
                });
    }

    @Test
    void isTheFixedSampleTestForASingleLook() {
        Design design = Design.of(new DesignRequest(0.025, false, LATE, 0.8, new double[] {1}, Optional.empty()));
        assertEquals(Normal.upperQuantile(0.025) + Normal.quantile(0.8), design.drift(), DRIFT);
        assertEquals(1, design.inflation(), DRIFT);
        assertEquals(1, design.looks().size());
        assertEquals(Double.NEGATIVE_INFINITY, design.looks().get(0).futility());
        Design futile = Design.of(new DesignRequest(0.025, false, LATE, 0.8, new double[] {1}, Optional.of(LATE)));
        assertEquals(design.drift(), futile.drift(), DRIFT);
        assertEquals(
                Normal.upperQuantile(0.025), futile.looks().get(0).futility(), "whatever is not a benefit is futile");
    }

    /** Information beyond the plan, or short of it, is worth what it is worth at a single look. */
    @Test
    void scalesWithTheInformationOfItsOnlyLook() {
        for (double fraction : new double[] {0.5, 1, 1.7}) {
            SpendingFunction even = SpendingFunction.kimDemets(1);
            Design design =
                    Design.of(new DesignRequest(0.025, true, even, 0.8, new double[] {fraction}, Optional.empty()));
            double level = 0.025 * Math.min(fraction, 1);
            double drift = (Normal.upperQuantile(level) + Normal.quantile(0.8)) / Math.sqrt(fraction);
            assertEquals(drift, design.drift(), DRIFT, "fraction " + fraction);
        }
    }

    @Test
    void costsMorePowerTheEarlierFutilityIsSpent() {
        double[] fractions = {0.25, 0.5, 0.75, 1};
        double without = inflation(fractions, Optional.empty());
        double late = inflation(fractions, Optional.of(SpendingFunction.hwangShihDecani(-8)));
        double early = inflation(fractions, Optional.of(SpendingFunction.hwangShihDecani(1)));
        assertTrue(without < late && late < early, without + ", " + late + ", " + early);
    }

    private static double inflation(double[] fractions, Optional<SpendingFunction> futility) {
        return Design.of(new DesignRequest(0.025, true, LATE, 0.8, fractions, futility))
                .inflation();
    }

    /** A look every hour for a week. */
    @Test
    void findsTheDriftForHundredsOfLooks() {
        double[] hourly = new double[168];
        for (int k = 0; k < hourly.length; k++) {
            hourly[k] = (k + 1.0) / hourly.length;
        }
        DesignRequest request =
                new DesignRequest(0.025, true, LATE, 0.8, hourly, Optional.of(SpendingFunction.hwangShihDecani(-2)));
        Design design = Design.of(request);
        double[] upper = design.looks().stream()
                .mapToDouble(look -> look.boundaries().upper())
                .toArray();
        double[] futility =
                design.looks().stream().mapToDouble(DesignLook::futility).toArray();
        ExitProbabilities exits = ExitProbabilities.of(hourly, upper, futility, design.drift());
        assertEquals(0.8, exits.totalUpper(), PROBABILITY);
        assertEquals(0.2, exits.totalLower(), PROBABILITY);
        DesignLook last = design.looks().get(167);
        assertEquals(last.boundaries().upper(), last.futility());
        assertTrue(design.inflation() > 1.1 && design.inflation() < 1.3, "inflation " + design.inflation());
    }

    @Test
    void refusesWhatCannotBePlanned() {
        assertThrows(IllegalArgumentException.class, () -> request(0.5, 0.8, 0.5, 1));
        assertThrows(IllegalArgumentException.class, () -> request(0.025, 0.4, 0.5, 1));
        assertThrows(IllegalArgumentException.class, () -> request(0.025, 0.8));
        assertThrows(IllegalArgumentException.class, () -> request(0.025, 0.8, 1, 1.1));
        assertThrows(IllegalArgumentException.class, () -> Design.of(request(0.025, 0.8, 0.5, 0.5)));
        assertThrows(IllegalArgumentException.class, () -> Design.of(request(0.025, 0.8, 0.001)));
    }

    private static DesignRequest request(double level, double power, double... fractions) {
        return new DesignRequest(level, false, LATE, power, fractions, Optional.empty());
    }
}
