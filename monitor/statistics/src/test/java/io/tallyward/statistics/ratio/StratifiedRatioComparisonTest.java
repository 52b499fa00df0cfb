package io.tallyward.statistics.ratio;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertThrows;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.statistics.ReferenceTable;
import io.tallyward.statistics.proportion.StratifiedComparison;
import io.tallyward.statistics.proportion.Stratum;
import java.math.BigInteger;
import java.util.ArrayList;
import java.util.Collections;
import java.util.List;
import java.util.Random;
import org.junit.jupiter.api.Test;

class StratifiedRatioComparisonTest {

    /** Relative; fifteen digits are printed in the reference, and a dozen roundings precede. */
    private static final double ROUNDING = 2e-14;

    private static final long SEED = 1977;

    @Test
    void isTheReferencesComparisonForOneStratum() {
        ReferenceTable.read("ratio_metric.csv").rows().forEach(row -> {
            String id = row.text("case_id");
            RatioStratum stratum = new RatioStratum(reference(id, "treatment"), reference(id, "control"));
            StratifiedRatioComparison found =
                    StratifiedRatioComparison.of(List.of(stratum)).orElseThrow();
            double error = row.number("se_difference");
            assertClose(row.number("difference"), found.difference(), id);
            assertClose(row.number("z"), found.z(), id);
            assertClose(1 / (error * error), found.information(), id);
            assertClose(row.number("ratio_control"), found.controlRatio(), id);
            assertClose(row.number("var_ratio_control"), found.controlVariance(), id);
            assertClose(row.number("var_ratio_treatment"), found.variantVariance(), id);
        });
    }

    private static UnitSums reference(String id, String arm) {
        return ReferenceTable.read("ratio_metric_users.csv")
                .rows()
                .filter(user ->
                        user.text("case_id").equals(id) && user.text("arm").equals(arm))
                .map(user -> UnitSums.ofUnit(user.count("views"), user.count("clicks")))
                .reduce(UnitSums.NONE, UnitSums::plus);
    }

    @Test
    void isTheUnpooledComparisonOfTrialsWhereEveryUnitIsOne() {
        Random random = new Random(SEED);
        for (int run = 0; run < 300; run++) {
            List<Stratum> trials = new ArrayList<>();
            List<RatioStratum> units = new ArrayList<>();
            double variance = 0;
            for (int stratum = 0; stratum <= random.nextInt(4); stratum++) {
                Stratum next = stratum(random);
                trials.add(next);
                units.add(new RatioStratum(
                        trials(next.trials(), next.successes()),
                        trials(next.controlTrials(), next.controlSuccesses())));
                double n1 = next.trials();
                double n0 = next.controlTrials();
                double w = n1 * n0 / (n1 + n0);
                variance += w * w * (binomial(next.successes(), n1) + binomial(next.controlSuccesses(), n0));
            }
            String where = "seed " + SEED + ", run " + run + ": " + trials;
            StratifiedRatioComparison found =
                    StratifiedRatioComparison.of(units).orElseThrow();
            StratifiedComparison pooled = StratifiedComparison.of(trials).orElseThrow();
            assertEquals(pooled.difference(), found.difference(), 1e-14, where);
            assertEquals(variance, found.scoreVariance(), 1e-12 * variance, where);
            assertEquals(found.difference() * Math.sqrt(found.information()), found.z(), 1e-12, where);
        }
    }

    /** Variance of a rate with the divisor n - 1. */
    private static double binomial(double successes, double trials) {
        double rate = successes / trials;
        return rate * (1 - rate) / (trials - 1);
    }

    private static Stratum stratum(Random random) {
        long trials = 2 + random.nextInt(5_000);
        long controlTrials = 2 + random.nextInt(5_000);
        return new Stratum(
                1 + random.nextInt((int) trials - 1),
                trials,
                1 + random.nextInt((int) controlTrials - 1),
                controlTrials);
    }

    private static UnitSums trials(long trials, long successes) {
        BigInteger x = BigInteger.valueOf(trials);
        BigInteger y = BigInteger.valueOf(successes);
        return new UnitSums(trials, x, y, x, y, y);
    }

    @Test
    void isStandardNormalWithoutAnEffectThoughViewsAreNot() {
        Random random = new Random(SEED);
        int runs = 4_000;
        double square = 0;
        double naiveSquare = 0;
        int beyond = 0;
        for (int run = 0; run < runs; run++) {
            // Two strata of unlike rates and splits, as a ramp has them.
            List<RatioStratum> strata = List.of(
                    new RatioStratum(units(random, 60, 0.3), units(random, 240, 0.3)),
                    new RatioStratum(units(random, 200, 0.1), units(random, 200, 0.1)));
            double z = StratifiedRatioComparison.of(strata).orElseThrow().z();
            double naive = StratifiedComparison.of(strata.stream()
                            .map(StratifiedRatioComparisonTest::views)
                            .toList())
                    .orElseThrow()
                    .z();
            square += z * z;
            naiveSquare += naive * naive;
            beyond += Math.abs(z) >= 1.959963984540054 ? 1 : 0;
        }
        // The variance of z has standard error sqrt(2 / runs) = 0.022, the share beyond 1.96 sqrt(0.05 0.95 / runs) =
        // 0.0034;
        // estimating a variance from the 60 units of the smallest arm costs the normal law another one or two
        // hundredths.
        assertEquals(1, square / runs, 0.09, "variance of z, seed " + SEED);
        assertEquals(0.05, beyond / (double) runs, 0.013, "beyond 1.96, seed " + SEED);
        assertTrue(naiveSquare / runs > 1.5, "variance of z as if views were independent: " + naiveSquare / runs);
    }

    private static UnitSums units(Random random, int units, double rate) {
        UnitSums sums = UnitSums.NONE;
        for (int unit = 0; unit < units; unit++) {
            int views = 1;
            while (random.nextInt(4) > 0) {
                views++;
            }
            double own = rate * (random.nextBoolean() ? 0.2 : 1.8);
            int clicks = 0;
            for (int view = 0; view < views; view++) {
                clicks += random.nextDouble() < own ? 1 : 0;
            }
            sums = sums.plus(UnitSums.ofUnit(views, clicks));
        }
        return sums;
    }

    private static Stratum views(RatioStratum stratum) {
        return new Stratum(
                stratum.variant().numerator().longValueExact(),
                stratum.variant().denominator().longValueExact(),
                stratum.control().numerator().longValueExact(),
                stratum.control().denominator().longValueExact());
    }

    @Test
    void changesSignWithTheArms() {
        Random random = new Random(SEED);
        RatioStratum one = new RatioStratum(units(random, 40, 0.3), units(random, 50, 0.2));
        StratifiedRatioComparison found =
                StratifiedRatioComparison.of(List.of(one)).orElseThrow();
        StratifiedRatioComparison swapped = StratifiedRatioComparison.of(
                        List.of(new RatioStratum(one.control(), one.variant())))
                .orElseThrow();
        assertClose(-found.z(), swapped.z(), "z");
        assertClose(-found.difference(), swapped.difference(), "difference");
        assertClose(found.variantVariance(), swapped.controlVariance(), "variance");
    }

    @Test
    void doesNotDependOnTheOrderOfStrataBeyondRounding() {
        Random random = new Random(SEED);
        List<RatioStratum> strata = new ArrayList<>();
        for (int i = 0; i < 5; i++) {
            strata.add(new RatioStratum(units(random, 40, 0.3), units(random, 50, 0.2)));
        }
        double z = StratifiedRatioComparison.of(strata).orElseThrow().z();
        Collections.reverse(strata);
        assertEquals(z, StratifiedRatioComparison.of(strata).orElseThrow().z(), 1e-13);
    }

    @Test
    void passesOverStrataWithoutTwoUnitsInEachArm() {
        Random random = new Random(SEED);
        RatioStratum full = new RatioStratum(units(random, 40, 0.3), units(random, 50, 0.2));
        RatioStratum begun = new RatioStratum(units(random, 1, 0.3), units(random, 50, 0.2));
        assertEquals(StratifiedRatioComparison.of(List.of(full)), StratifiedRatioComparison.of(List.of(full, begun)));
        assertTrue(StratifiedRatioComparison.of(List.of(begun)).isEmpty());
        assertTrue(StratifiedRatioComparison.of(List.of()).isEmpty());
    }

    @Test
    void saysNothingWhereNothingVaries() {
        UnitSums alike = UnitSums.ofUnit(4, 1).plus(UnitSums.ofUnit(8, 2));
        assertTrue(StratifiedRatioComparison.of(List.of(new RatioStratum(alike, alike)))
                .isEmpty());
    }

    @Test
    void refusesWhatIsNoComparison() {
        assertThrows(IllegalArgumentException.class, () -> new StratifiedRatioComparison(Double.NaN, 0, 1, 1, 0, 0, 0));
        assertThrows(IllegalArgumentException.class, () -> new StratifiedRatioComparison(0, Double.NaN, 1, 1, 0, 0, 0));
        assertThrows(IllegalArgumentException.class, () -> new StratifiedRatioComparison(0, 0, 0, 1, 0, 0, 0));
        assertThrows(
                IllegalArgumentException.class,
                () -> new StratifiedRatioComparison(0, 0, 1, Double.POSITIVE_INFINITY, 0, 0, 0));
        assertThrows(IllegalArgumentException.class, () -> new StratifiedRatioComparison(0, 0, 1, 1, Double.NaN, 0, 0));
        assertThrows(IllegalArgumentException.class, () -> new StratifiedRatioComparison(0, 0, 1, 1, 0, -1, 0));
        assertThrows(IllegalArgumentException.class, () -> new StratifiedRatioComparison(0, 0, 1, 1, 0, 0, -1));
        assertThrows(NullPointerException.class, () -> new RatioStratum(null, UnitSums.NONE));
    }

    private static void assertClose(double expected, double found, String where) {
        assertEquals(expected, found, ROUNDING * Math.abs(expected), where);
    }
}
