package io.tallyward.statistics.inference;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertThrows;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.statistics.boundary.BoundarySequence;
import io.tallyward.statistics.boundary.Look;
import io.tallyward.statistics.distribution.Normal;
import io.tallyward.statistics.spending.SpendingFunction;
import java.util.ArrayList;
import java.util.List;
import java.util.Random;
import org.apache.commons.math3.analysis.integration.IterativeLegendreGaussIntegrator;
import org.junit.jupiter.api.Test;

class StagewiseInferenceTest {

    private static final long SEED = 1984;

    /** Absolute; two summations of the same probability. */
    private static final double PROBABILITY = 1e-12;

    /** Absolute, at information about 1: twice what drifts are solved to. */
    private static final double DRIFT = 1e-11;

    private static final SpendingFunction LATE = SpendingFunction.obrienFlemingType();
    private static final SpendingFunction EARLY = SpendingFunction.pocockType();

    /** A stop exactly on a boundary is as extreme as what has been spent by then, whatever the spending and the looks. */
    @Test
    void givesAStopOnTheBoundaryThePValueThatIsSpent() {
        Random random = new Random(SEED);
        for (int run = 0; run < 30; run++) {
            List<Look> looks = randomLooks(random, 1 + random.nextInt(6));
            Look last = looks.get(looks.size() - 1);
            String where = "seed " + SEED + ", run " + run;
            StagewiseInference up = StagewiseInference.of(looks, last.upper());
            assertEquals(last.upperSpent(), up.pUpper(), PROBABILITY, where);
            assertEquals(0, up.interval(1 - 2 * last.upperSpent()).lower(), 1e-9, where);
            StagewiseInference down = StagewiseInference.of(looks, last.lower());
            assertEquals(last.lowerSpent(), down.pLower(), PROBABILITY, where);
            assertEquals(0, down.interval(1 - 2 * last.lowerSpent()).upper(), 1e-9, where);
        }
    }

    @Test
    void mirrorsItselfWhenTheSignsAreSwapped() {
        Random random = new Random(SEED + 1);
        for (int run = 0; run < 20; run++) {
            List<Look> looks = randomLooks(random, 4);
            List<Look> mirrored = looks.stream()
                    .map(look -> new Look(
                            look.number(),
                            look.information(),
                            look.lowerSpent(),
                            look.upperSpent(),
                            -look.lower(),
                            -look.upper()))
                    .toList();
            double z = 8 * random.nextDouble() - 4;
            StagewiseInference stop = StagewiseInference.of(looks, z);
            StagewiseInference other = StagewiseInference.of(mirrored, -z);
            String where = "seed " + (SEED + 1) + ", run " + run;
            assertEquals(stop.pUpper(), other.pLower(), PROBABILITY, where);
            assertEquals(stop.medianUnbiasedDrift(), -other.medianUnbiasedDrift(), DRIFT, where);
            assertEquals(stop.interval(0.9).lower(), -other.interval(0.9).upper(), DRIFT, where);
        }
    }

    @Test
    void putsTheEndsWhereTheirProbabilitySays() {
        Random random = new Random(SEED + 2);
        for (int run = 0; run < 20; run++) {
            List<Look> looks = randomLooks(random, 5);
            StagewiseInference stop = StagewiseInference.of(looks, 10 * random.nextDouble() - 5);
            Estimate estimate = stop.estimate(0.8);
            String where = "seed " + (SEED + 2) + ", run " + run;
            assertEquals(0.5, stop.pUpper(estimate.value()), 1e-10, where);
            assertEquals(0.1, stop.pUpper(estimate.interval().lower()), 1e-10, where);
            assertEquals(0.9, stop.pUpper(estimate.interval().upper()), 1e-10, where);
            assertEquals(1, stop.pUpper() + stop.pLower(), PROBABILITY, where);
        }
    }

    /** Two looks with unequal boundaries against a general-purpose adaptive integrator over the first statistic. */
    @Test
    void agreesWithPlainIntegration() {
        List<Look> looks = List.of(new Look(1, 0.3, 0.01, 0.05, 2.2, -1.4), new Look(2, 0.9, 0.02, 0.06, 2.1, -1.8));
        double drift = 1.7;
        double z = 1.9;
        StagewiseInference stop = StagewiseInference.of(looks, z);
        double mean = drift * Math.sqrt(0.3);
        double still = new IterativeLegendreGaussIntegrator(20, 1e-11, 1e-13, 3, 20)
                .integrate(
                        1_000_000,
                        first -> Normal.density(first - mean)
                                * Normal.survival(
                                        (z * Math.sqrt(0.9) - first * Math.sqrt(0.3) - drift * 0.6) / Math.sqrt(0.6)),
                        -1.4,
                        2.2);
        assertEquals(Normal.survival(2.2 - mean) + still, stop.pUpper(drift), PROBABILITY);
    }

    /** The interval holds the truth as often as it says, and the median estimate is too large half of the time. */
    @Test
    void holdsTheTruthAsOftenAsItSays() {
        Random random = new Random(SEED + 3);
        List<Look> looks = looks(EARLY, 0.025, 0.025, 0.25, 0.5, 0.75, 1);
        double drift = 2.2;
        int runs = 2000;
        int held = 0;
        int above = 0;
        for (int run = 0; run < runs; run++) {
            double score = 0;
            double before = 0;
            for (int k = 0; k < looks.size(); k++) {
                Look look = looks.get(k);
                double step = look.information() - before;
                score += drift * step + Math.sqrt(step) * random.nextGaussian();
                before = look.information();
                double z = score / Math.sqrt(before);
                if (z >= look.upper() || z <= look.lower() || k == looks.size() - 1) {
                    StagewiseInference stop = StagewiseInference.of(looks.subList(0, k + 1), z);
                    double p = stop.pUpper(drift);
                    held += p >= 0.05 && p <= 0.95 ? 1 : 0;
                    above += p < 0.5 ? 1 : 0;
                    break;
                }
            }
        }
        // Four binomial standard deviations; the interval of level 0.9 holds the drift when 0.05 <= G(drift) <= 0.95.
        assertEquals(0.9, held / (double) runs, 4 * Math.sqrt(0.09 / runs), "seed " + (SEED + 3));
        assertEquals(0.5, above / (double) runs, 4 * Math.sqrt(0.25 / runs), "seed " + (SEED + 3));
    }

    @Test
    void pullsTheEstimateTowardsNothingAfterAnEarlyStop() {
        List<Look> looks = looks(EARLY, 0.025, 0.025, 0.25, 0.5);
        StagewiseInference stop = StagewiseInference.of(looks, 2.5);
        assertTrue(stop.medianUnbiasedDrift() < stop.naiveDrift() && stop.medianUnbiasedDrift() > 0);
    }

    @Test
    void takesNoNoticeOfALookThatCouldNotStop() {
        Look silent = new Look(1, 0.2, 0, 0, Double.POSITIVE_INFINITY, Double.NEGATIVE_INFINITY);
        StagewiseInference stop =
                StagewiseInference.of(List.of(silent, new Look(2, 1, 0.025, 0.025, 1.96, -1.96)), 2.5);
        assertEquals(Normal.survival(2.5), stop.pUpper(), PROBABILITY);
        assertEquals(2.5, stop.medianUnbiasedDrift(), DRIFT);
        // Where a look could not stop upwards, z may be of any size when the first one can.
        StagewiseInference far = StagewiseInference.of(List.of(silent, new Look(2, 1, 0.025, 0.025, 1.96, -1.96)), 1e5);
        assertEquals(0, far.pUpper());
        assertEquals(1e5, far.medianUnbiasedDrift(), 1e-9);
    }

    @Test
    void putsTheEndsWhereTheirProbabilitySaysAfterManyLooks() {
        double[] t = new double[60];
        for (int k = 0; k < t.length; k++) {
            t[k] = (k + 1.0) / t.length;
        }
        StagewiseInference stop = StagewiseInference.of(looks(LATE, 0.025, 0.025, t), 2.3);
        Estimate estimate = stop.estimate(0.95);
        assertEquals(0.5, stop.pUpper(estimate.value()), PROBABILITY);
        assertEquals(0.025, stop.pUpper(estimate.interval().lower()), PROBABILITY);
        assertEquals(0.975, stop.pUpper(estimate.interval().upper()), PROBABILITY);
    }

    /** A path that should have stopped long before, in either direction, and levels far beyond the usual. */
    @Test
    void findsDriftsFarFromTheNaiveOne() {
        List<Look> looks = looks(EARLY, 0.025, 0.025, 0.2, 0.4, 0.6, 0.8, 1);
        for (double z : new double[] {-9, -6, 6, 9}) {
            StagewiseInference stop = StagewiseInference.of(looks, z);
            double median = stop.medianUnbiasedDrift();
            assertEquals(0.5, stop.pUpper(median), 1e-10, "z " + z);
            assertTrue(Math.abs(median) < Math.abs(z), "z " + z + ", median " + median);
        }
        StagewiseInference stop = StagewiseInference.of(looks, 2.2);
        Interval wide = stop.interval(1 - 2e-9);
        assertEquals(1e-9, stop.pUpper(wide.lower()), 1e-15);
        assertEquals(1 - 1e-9, stop.pUpper(wide.upper()), 1e-15);
        assertEquals(stop.interval(0.9), stop.estimate(0.9).interval());
    }

    /** Far out, tails count relatively: 15 standard deviations, against the same after looks that hardly matter. */
    @Test
    void keepsItsDigitsFarOut() {
        List<Look> looks = looks(LATE, 0.025, 0.025, 0.01, 0.02, 0.03);
        StagewiseInference stop = StagewiseInference.of(looks, 15);
        assertTrue(looks.get(1).upper() > 14 && looks.get(0).upper() > 20);
        double first = Normal.survival(looks.get(1).upper());
        assertTrue(
                stop.pUpper() > first && stop.pUpper() < first * (1 + 1e-3) + Normal.survival(15), stop.pUpper() + "");
    }

    @Test
    void refusesWhatIsNoStop() {
        Look first = new Look(1, 0.5, 0.01, 0.01, 2.3, -2.3);
        Look second = new Look(2, 1, 0.02, 0.02, 2.2, -2.2);
        List<Runnable> refused = List.of(
                () -> StagewiseInference.of(List.of(), 2),
                () -> StagewiseInference.of(List.of(second), 2),
                () -> StagewiseInference.of(List.of(first, new Look(2, 0.5, 0.02, 0.02, 2.2, -2.2)), 2),
                () -> StagewiseInference.of(List.of(new Look(1, 0.5, 0.01, 0.01, 1, 1), second), 2),
                () -> StagewiseInference.of(List.of(first, second), Double.NaN),
                () -> StagewiseInference.of(List.of(first, second), Double.POSITIVE_INFINITY),
                () -> StagewiseInference.of(List.of(first, second), 2).interval(1),
                () -> StagewiseInference.of(List.of(first, second), 2).pUpper(Double.NaN));
        refused.forEach(call -> assertThrows(IllegalArgumentException.class, call::run));
    }

    private static List<Look> looks(SpendingFunction spending, double upper, double lower, double... fractions) {
        BoundarySequence sequence = new BoundarySequence();
        List<Look> looks = new ArrayList<>();
        for (double t : fractions) {
            looks.add(sequence.next(t, spending.spent(upper, t), spending.spent(lower, t)));
        }
        return looks;
    }

    /** Irregular looks, each tail with its own level. */
    private static List<Look> randomLooks(Random random, int count) {
        double upperLevel = 0.005 + 0.05 * random.nextDouble();
        double lowerLevel = 0.005 + 0.05 * random.nextDouble();
        double[] t = new double[count];
        double last = 0;
        for (int k = 0; k < count; k++) {
            last += 0.05 + (random.nextInt(3) == 0 ? 0.01 : 0.3) * random.nextDouble();
            t[k] = last;
        }
        return looks(EARLY, upperLevel, lowerLevel, t);
    }
}
