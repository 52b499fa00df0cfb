package io.tallyward.statistics.proportion;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertThrows;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.statistics.ReferenceTable;
import io.tallyward.statistics.ReferenceTable.Row;
import java.math.BigDecimal;
import java.math.MathContext;
import java.util.ArrayList;
import java.util.Collections;
import java.util.List;
import java.util.Map;
import java.util.Optional;
import java.util.Random;
import org.junit.jupiter.api.Test;

class StratifiedComparisonTest {

    /** Relative; a dozen roundings, and 15 digits printed in the reference. */
    private static final double ROUNDING = 2e-14;

    private static final long SEED = 1954;

    @Test
    void isThePooledStatisticForOneStratum() {
        ReferenceTable.read("two_proportions.csv").rows().forEach(row -> {
            Optional<StratifiedComparison> comparison = StratifiedComparison.of(List.of(stratum(row)));
            String where = row.text("case_id");
            assertEquals(row.has("z_pooled"), comparison.isPresent(), where);
            comparison.ifPresent(found -> {
                assertClose(row.number("z_pooled"), found.z(), where);
                assertClose(row.number("risk_difference"), found.difference(), where);
            });
        });
    }

    @Test
    void isCochransStatisticOverStrata() {
        Map<String, List<Row>> counts =
                ReferenceTable.read("stratified_counts.csv").by("case_id");
        ReferenceTable.read("stratified.csv").rows().forEach(row -> {
            String where = row.text("case_id");
            List<Stratum> strata = counts.get(where).stream()
                    .map(StratifiedComparisonTest::stratum)
                    .toList();
            StratifiedComparison found = StratifiedComparison.of(strata).orElseThrow();
            assertClose(row.number("cochran_z"), found.z(), where);
            assertClose(row.number("mh_risk_difference"), found.difference(), where);
        });
    }

    @Test
    void doesNotMistakeARampForAnEffect() {
        // Same rates in both arms at any time, but the variant got most of its trials when rates were low.
        List<Stratum> ramp = List.of(new Stratum(50, 500, 950, 9500), new Stratum(450, 9000, 50, 1000));
        List<Stratum> crude = List.of(new Stratum(500, 9500, 1000, 10500));
        assertEquals(0, StratifiedComparison.of(ramp).orElseThrow().z());
        assertTrue(StratifiedComparison.of(crude).orElseThrow().z() < -10);
    }

    @Test
    void doesNotCareAboutOrderAndMirrorsWhenArmsAreSwapped() {
        Random random = new Random(SEED);
        for (int run = 0; run < 200; run++) {
            List<Stratum> strata = new ArrayList<>();
            for (int i = 0; i < 4; i++) {
                long trials = random.nextInt(10_000) + 1;
                long control = random.nextInt(10_000) + 1;
                strata.add(new Stratum(random.nextInt((int) trials), trials, random.nextInt((int) control), control));
            }
            StratifiedComparison found = StratifiedComparison.of(strata).orElseThrow();
            String where = "seed " + SEED + ", run " + run;
            assertEquals(found.z(), found.difference() * Math.sqrt(found.information()), 1e-12, where);
            Collections.shuffle(strata, random);
            assertEquals(
                    found.z(), StratifiedComparison.of(strata).orElseThrow().z(), 1e-12, where);
            List<Stratum> swapped = strata.stream()
                    .map(s -> new Stratum(s.controlSuccesses(), s.controlTrials(), s.successes(), s.trials()))
                    .toList();
            assertEquals(
                    -found.z(), StratifiedComparison.of(swapped).orElseThrow().z(), 1e-12, where);
        }
    }

    /** The same in decimal arithmetic with fifty digits. */
    @Test
    void staysExactForTrillionsOfTrials() {
        Stratum huge = new Stratum(500_000_400_003L, 1_000_000_000_007L, 499_999_900_001L, 999_999_999_989L);
        MathContext digits = new MathContext(50);
        BigDecimal a = BigDecimal.valueOf(huge.successes());
        BigDecimal n1 = BigDecimal.valueOf(huge.trials());
        BigDecimal b = BigDecimal.valueOf(huge.controlSuccesses());
        BigDecimal n0 = BigDecimal.valueOf(huge.controlTrials());
        BigDecimal n = n1.add(n0);
        BigDecimal m = a.add(b);
        BigDecimal excess = a.multiply(n0).subtract(b.multiply(n1)).divide(n, digits);
        BigDecimal variance =
                n1.multiply(n0).multiply(m).multiply(n.subtract(m)).divide(n.pow(3), digits);
        double expected = excess.divide(variance.sqrt(digits), digits).doubleValue();
        assertClose(
                expected, StratifiedComparison.of(List.of(huge)).orElseThrow().z(), "huge");
    }

    @Test
    void isEmptyWithoutInformation() {
        assertTrue(StratifiedComparison.of(List.of()).isEmpty());
        assertTrue(StratifiedComparison.of(List.of(new Stratum(0, 0, 0, 0))).isEmpty());
        assertTrue(StratifiedComparison.of(List.of(new Stratum(3, 9, 0, 0))).isEmpty());
        assertTrue(StratifiedComparison.of(List.of(new Stratum(0, 9, 0, 7))).isEmpty());
        assertTrue(StratifiedComparison.of(List.of(new Stratum(9, 9, 7, 7))).isEmpty());
    }

    @Test
    void ignoresAStratumWithoutTrialsInOneArm() {
        Stratum full = new Stratum(10, 100, 14, 100);
        assertEquals(
                StratifiedComparison.of(List.of(full)),
                StratifiedComparison.of(List.of(full, new Stratum(3, 9, 0, 0))));
    }

    @Test
    void refusesCountsThatCannotBe() {
        assertThrows(IllegalArgumentException.class, () -> new Stratum(-1, 5, 0, 5));
        assertThrows(IllegalArgumentException.class, () -> new Stratum(6, 5, 0, 5));
        assertThrows(IllegalArgumentException.class, () -> new Stratum(0, 5, 6, 5));
        assertThrows(IllegalArgumentException.class, () -> new Stratum(0, 5, 0, (1L << 53) + 1));
    }

    private static Stratum stratum(Row row) {
        return new Stratum(
                row.count("x_treatment"), row.count("n_treatment"), row.count("x_control"), row.count("n_control"));
    }

    private static void assertClose(double expected, double actual, String where) {
        assertEquals(expected, actual, ROUNDING * Math.max(1e-6, Math.abs(expected)), where);
    }
}
