package io.tallyward.statistics.spending;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertThrows;
import static org.junit.jupiter.api.Assertions.assertTrue;

import java.util.List;
import java.util.Random;
import org.junit.jupiter.api.Test;

class SpendingFunctionTest {

    private static final long SEED = 41;

    private static final List<SpendingFunction> FAMILIES = List.of(
            SpendingFunction.obrienFlemingType(),
            SpendingFunction.pocockType(),
            SpendingFunction.hwangShihDecani(-40),
            SpendingFunction.hwangShihDecani(-4),
            SpendingFunction.hwangShihDecani(0),
            SpendingFunction.hwangShihDecani(1e-12),
            SpendingFunction.hwangShihDecani(3),
            SpendingFunction.kimDemets(0.5),
            SpendingFunction.kimDemets(1),
            SpendingFunction.kimDemets(3));

    /** Relative; each formula is a handful of roundings. */
    private static final double ROUNDING = 1e-14;

    @Test
    void spendsNothingAtTheStartAndExactlyTheLevelAtTheEnd() {
        for (SpendingFunction family : FAMILIES) {
            for (double level : new double[] {0.025, 0.05, 1.0 / 3, 0.1}) {
                assertEquals(0, family.spent(level, 0), family.toString());
                assertEquals(level, family.spent(level, 1), family.toString());
                assertEquals(level, family.spent(level, 1.7), family.toString());
                assertEquals(level, family.spent(level, Double.POSITIVE_INFINITY), family.toString());
            }
        }
    }

    @Test
    void neverFallsAndNeverExceedsTheLevel() {
        Random random = new Random(SEED);
        for (int i = 0; i < 5000; i++) {
            SpendingFunction family = FAMILIES.get(random.nextInt(FAMILIES.size()));
            double level = 0.2 * random.nextDouble() + 1e-6;
            double earlier = random.nextDouble();
            double later = earlier + (1 - earlier) * random.nextDouble() * random.nextDouble();
            double before = family.spent(level, earlier);
            double after = family.spent(level, later);
            String where = "seed " + SEED + ", " + family + ", level " + level + ", " + earlier + " to " + later;
            assertTrue(before >= 0 && before <= after * (1 + ROUNDING) && after <= level, where);
        }
    }

    @Test
    void agreesWithTheFormulasWorkedByHand() {
        // 4 (1 - Phi(2.2414 / sqrt 0.5)) / 2 per tail; the published total for two sides at half the information is
        // 0.00305.
        assertEquals(0.00305, 2 * SpendingFunction.obrienFlemingType().spent(0.025, 0.5), 5e-6);
        double half = 0.05 * Math.log(1 + (Math.E - 1) / 2);
        assertEquals(half, SpendingFunction.pocockType().spent(0.05, 0.5), ROUNDING);
        double late = 0.05 * (1 - Math.exp(2)) / (1 - Math.exp(4));
        assertEquals(late, SpendingFunction.hwangShihDecani(-4).spent(0.05, 0.5), ROUNDING);
        assertEquals(0.05 / 8, SpendingFunction.kimDemets(3).spent(0.05, 0.5), ROUNDING);
    }

    @Test
    void passesThroughEvenSpendingWhereItsFamiliesMeet() {
        for (double fraction : new double[] {0.01, 0.3, 0.99}) {
            double even = 0.025 * fraction;
            assertEquals(even, SpendingFunction.hwangShihDecani(0).spent(0.025, fraction), ROUNDING * even);
            assertEquals(even, SpendingFunction.kimDemets(1).spent(0.025, fraction), ROUNDING * even);
            // Continuity at gamma = 0: the next term of the expansion is gamma (1 - t) / 2.
            assertEquals(even, SpendingFunction.hwangShihDecani(1e-12).spent(0.025, fraction), 1e-12 * even);
        }
    }

    @Test
    void isAValue() {
        assertEquals(SpendingFunction.hwangShihDecani(-4), SpendingFunction.hwangShihDecani(-4));
        assertEquals(SpendingFunction.obrienFlemingType(), SpendingFunction.obrienFlemingType());
    }

    @Test
    void refusesWhatHasNoMeaning() {
        for (double gamma : new double[] {-41, 41, Double.NaN}) {
            assertThrows(IllegalArgumentException.class, () -> SpendingFunction.hwangShihDecani(gamma));
        }
        for (double rho : new double[] {0, -1, 101, Double.NaN}) {
            assertThrows(IllegalArgumentException.class, () -> SpendingFunction.kimDemets(rho));
        }
        SpendingFunction pocock = SpendingFunction.pocockType();
        for (double level : new double[] {0, 1, -0.1, Double.NaN}) {
            assertThrows(IllegalArgumentException.class, () -> pocock.spent(level, 0.5));
        }
        for (double fraction : new double[] {-1e-9, Double.NaN}) {
            assertThrows(IllegalArgumentException.class, () -> pocock.spent(0.05, fraction));
        }
    }
}
