package io.tallyward.statistics.boundary;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertThrows;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.statistics.distribution.Normal;
import io.tallyward.statistics.spending.SpendingFunction;
import java.util.ArrayList;
import java.util.List;
import java.util.Random;
import org.apache.commons.math3.analysis.integration.IterativeLegendreGaussIntegrator;
import org.junit.jupiter.api.Test;

class BoundarySequenceTest {

    private static final long SEED = 1969;

    /** The reference integrator below is asked for 1e-13; probabilities are compared absolutely. */
    private static final double PROBABILITY = 1e-12;

    private static final SpendingFunction LATE = SpendingFunction.obrienFlemingType();
    private static final SpendingFunction EARLY = SpendingFunction.pocockType();

    @Test
    void continuesBitForBitAfterResuming() {
        Random random = new Random(SEED);
        for (int run = 0; run < 20; run++) {
            List<Look> whole = randomLooks(random, 3 + random.nextInt(8));
            int cut = 1 + random.nextInt(whole.size() - 1);
            BoundarySequence resumed = BoundarySequence.resume(whole.subList(0, cut));
            for (Look look : whole.subList(cut, whole.size())) {
                Look again = resumed.next(look.information(), look.upperSpent(), look.lowerSpent());
                assertEquals(look, again, "seed " + SEED + ", run " + run + ", cut after " + cut);
            }
        }
    }

    @Test
    void continuesBitForBitFromACopyAndLeavesTheOriginalAlone() {
        Random random = new Random(SEED + 3);
        for (int run = 0; run < 20; run++) {
            List<Look> whole = randomLooks(random, 3 + random.nextInt(8));
            BoundarySequence original = new BoundarySequence();
            for (Look look : whole) {
                BoundarySequence ahead = original.copy();
                ahead.next(look.information() * 1.5, look.upperSpent(), look.lowerSpent());
                BoundarySequence copy = original.copy();
                String where = "seed " + (SEED + 3) + ", run " + run + ", look " + look.number();
                assertEquals(look, copy.next(look.information(), look.upperSpent(), look.lowerSpent()), where);
                assertEquals(look, original.next(look.information(), look.upperSpent(), look.lowerSpent()), where);
                assertEquals(look.number(), ahead.looks(), where);
            }
        }
    }

    @Test
    void mirrorsItselfWhenTheTailsAreSwapped() {
        Random random = new Random(SEED + 1);
        for (int run = 0; run < 20; run++) {
            List<Look> looks = randomLooks(random, 5);
            BoundarySequence mirrored = new BoundarySequence();
            for (Look look : looks) {
                Look other = mirrored.next(look.information(), look.lowerSpent(), look.upperSpent());
                // Both tails are solved by the same steps with signs reversed; only summation order differs.
                assertMirrored(look.upper(), other.lower(), "seed " + (SEED + 1) + ", run " + run + ", " + look);
                assertMirrored(look.lower(), other.upper(), "seed " + (SEED + 1) + ", run " + run + ", " + look);
            }
        }
    }

    private static void assertMirrored(double bound, double other, String where) {
        if (Double.isInfinite(bound)) {
            assertEquals(-bound, other, where);
        } else {
            assertEquals(-bound, other, 1e-11, where);
        }
    }

    @Test
    void spendsInEachTailWhatItWasGiven() {
        Random random = new Random(SEED + 2);
        for (int run = 0; run < 20; run++) {
            List<Look> looks = randomLooks(random, 6);
            ExitProbabilities exits = ExitProbabilities.of(
                    looks.stream().mapToDouble(Look::information).toArray(),
                    looks.stream().mapToDouble(Look::upper).toArray(),
                    looks.stream().mapToDouble(Look::lower).toArray(),
                    0);
            Look last = looks.get(looks.size() - 1);
            assertEquals(last.upperSpent(), exits.totalUpper(), PROBABILITY, "seed " + (SEED + 2) + ", run " + run);
            assertEquals(last.lowerSpent(), exits.totalLower(), PROBABILITY, "seed " + (SEED + 2) + ", run " + run);
        }
    }

    /** Two looks with unequal tails against a general-purpose adaptive integrator over the first statistic. */
    @Test
    void agreesWithPlainIntegrationForUnequalTails() {
        double t1 = 0.37;
        double t2 = 0.81;
        BoundarySequence sequence = new BoundarySequence();
        Look first = sequence.next(t1, 0.004, 0.03);
        assertEquals(Normal.upperQuantile(0.004), first.upper());
        assertEquals(Normal.quantile(0.03), first.lower());
        Look second = sequence.next(t2, 0.02, 0.031);
        double rho = Math.sqrt(t1 / t2);
        IterativeLegendreGaussIntegrator integrator = new IterativeLegendreGaussIntegrator(20, 1e-13, 1e-14, 3, 20);
        double above = integrator.integrate(
                1_000_000,
                z -> Normal.density(z) * Normal.survival((second.upper() - rho * z) / Math.sqrt(1 - rho * rho)),
                first.lower(),
                first.upper());
        double below = integrator.integrate(
                1_000_000,
                z -> Normal.density(z) * Normal.cdf((second.lower() - rho * z) / Math.sqrt(1 - rho * rho)),
                first.lower(),
                first.upper());
        assertEquals(0.016, above, PROBABILITY);
        assertEquals(0.001, below, PROBABILITY);
    }

    @Test
    void staysExactlySymmetricWhileBothTailsSpendTheSame() {
        BoundarySequence sequence = new BoundarySequence();
        for (double t : new double[] {0.11, 0.2, 0.21, 0.6, 0.95, 1.3}) {
            double spent = EARLY.spent(0.025, t);
            Look look = sequence.next(t, spent, spent);
            assertEquals(-look.upper(), look.lower());
        }
    }

    @Test
    void givesNoBoundaryToATailThatSpendsNothing() {
        BoundarySequence sequence = new BoundarySequence();
        Look harmOnly = sequence.next(0.2, 0, 0.001);
        assertEquals(Double.POSITIVE_INFINITY, harmOnly.upper());
        assertEquals(Normal.quantile(0.001), harmOnly.lower());
        Look neither = sequence.next(0.4, 0, 0.001);
        assertEquals(Double.POSITIVE_INFINITY, neither.upper());
        assertEquals(Double.NEGATIVE_INFINITY, neither.lower());
        Look both = sequence.next(1, 0.025, 0.025);
        // Hardly any path falls to the harm boundary first and then rises to this one: 6e-8, or 1e-6 in z.
        // once.
        assertEquals(Normal.upperQuantile(0.025), both.upper(), 2e-6);
        assertTrue(both.upper() < Normal.upperQuantile(0.025));
    }

    @Test
    void staysFiniteAndOrderedFarOutInTheTail() {
        BoundarySequence sequence = new BoundarySequence();
        double last = Double.POSITIVE_INFINITY;
        for (double t : new double[] {0.0005, 0.002, 0.004, 0.0041, 0.02, 0.1, 1}) {
            double spent = LATE.spent(0.025, t);
            double upper = sequence.next(t, spent, spent).upper();
            assertTrue(upper < last || t == 0.0005 || upper == last, "at " + t + ": " + upper);
            last = upper;
        }
        assertTrue(last < 2.1);
    }

    @Test
    void solvesAfterTheSmallestStepItAccepts() {
        BoundarySequence sequence = new BoundarySequence();
        sequence.next(0.5, 0.01, 0);
        Look close = sequence.next(0.5 * (1 + 2 * BoundarySequence.LEAST_GROWTH), 0.01001, 0);
        assertTrue(close.upper() > Normal.upperQuantile(0.01) && close.upper() < Normal.upperQuantile(0.00001));
        Look tiny = sequence.next(0.5 * (1 + 4 * BoundarySequence.LEAST_GROWTH), 0.01001 + 1e-16, 0);
        assertTrue(tiny.upper() > close.upper());
    }

    @Test
    void refusesALookThatDoesNotFollow() {
        BoundarySequence sequence = new BoundarySequence();
        Look first = sequence.next(0.4, 0.01, 0.01);
        assertThrows(IllegalArgumentException.class, () -> sequence.next(0.4, 0.02, 0.02));
        assertThrows(IllegalArgumentException.class, () -> sequence.next(0.4000001, 0.02, 0.02));
        assertThrows(IllegalArgumentException.class, () -> sequence.next(Double.NaN, 0.02, 0.02));
        assertThrows(IllegalArgumentException.class, () -> sequence.next(0.5, 0.009, 0.02));
        assertThrows(IllegalArgumentException.class, () -> sequence.next(0.5, 0.02, Double.NaN));
        assertThrows(IllegalArgumentException.class, () -> sequence.next(0.5, 0.6, 0.4));
        assertThrows(IllegalArgumentException.class, () -> sequence.resume(first));
        assertEquals(1, sequence.looks());
        BoundarySequence untouched = BoundarySequence.resume(List.of(first));
        assertEquals(untouched.next(0.8, 0.02, 0.01), sequence.next(0.8, 0.02, 0.01));
    }

    /** Irregular looks; each tail spends by its own function at its own level and may stay silent at first. */
    private static List<Look> randomLooks(Random random, int count) {
        double upperLevel = 0.001 + 0.05 * random.nextDouble();
        double lowerLevel = random.nextInt(4) == 0 ? 0 : 0.001 + 0.05 * random.nextDouble();
        double silentUntil = random.nextInt(2) == 0 ? 0 : 0.5 * random.nextDouble();
        BoundarySequence sequence = new BoundarySequence();
        List<Look> looks = new ArrayList<>();
        double t = 0;
        for (int k = 0; k < count; k++) {
            t += 0.001 + (random.nextInt(3) == 0 ? 0.01 : 0.3) * random.nextDouble();
            double upper = t < silentUntil ? 0 : LATE.spent(upperLevel, t);
            double lower = lowerLevel == 0 ? 0 : EARLY.spent(lowerLevel, t);
            looks.add(sequence.next(t, upper, lower));
        }
        return looks;
    }
}
