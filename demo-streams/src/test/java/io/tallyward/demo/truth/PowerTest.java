package io.tallyward.demo.truth;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.demo.story.Northwater;
import io.tallyward.demo.story.ToldScenario;
import io.tallyward.demo.truth.ExperimentTruth.Stratum;
import java.time.Duration;
import java.util.Arrays;
import java.util.Map;
import org.apache.commons.math3.distribution.ChiSquaredDistribution;
import org.apache.commons.math3.distribution.NormalDistribution;
import org.junit.jupiter.api.Test;

/**
 * What the stories promise about their power, computed from the counts with the textbook's fixed-sample normal
 * approximation (two proportions, pooled variance; Fleiss, Levin and Paik 2003, chapter 4, from memory). The last boundary
 * of a sequential plan is never above 2.5 for the plans tested here, and looks before the last only add to the power.
 */
class PowerTest {

    private static final NormalDistribution NORMAL = new NormalDistribution(0, 1);
    private static final double LAST_BOUNDARY = 2.5;
    private static final double MISS = 1e-3;

    private static final Map<String, ExperimentTruth> TRUTH =
            Truth.of(ToldScenario.withDefaultSeed(), 4).experiments();

    private final Map<String, ExperimentTruth> truth = TRUTH;

    @Test
    void benefitOfTheQuayBannerCannotBeMissed() {
        assertTrue(miss("quay-banner", "plain", "wide", 0.120, 0.145) < MISS);
        assertTrue(z("quay-banner", 0, "plain", "wide") > LAST_BOUNDARY);
    }

    @Test
    void harmOfTheReturnPromptCannotBeMissed() {
        assertTrue(miss("return-prompt", "silent", "prompt", 0.150, 0.125) < MISS);
        assertTrue(z("return-prompt", 0, "silent", "prompt") < -LAST_BOUNDARY);
    }

    @Test
    void tiltedDeckMapCannotBeMissedAndTheChartIsNoBenefit() {
        assertTrue(miss("deck-map", "list", "tilt", 0.130, 0.155) < MISS);
        assertTrue(z("deck-map", 0, "list", "tilt") > LAST_BOUNDARY);
        assertTrue(z("deck-map", 0, "list", "chart") < 1.645);
    }

    @Test
    void pooledFareChipWouldFoolAndStratifiedDoesNot() {
        Map<Stratum, Count> totals = totals("fare-chip");
        Count bare = at(totals, 0, "bare").plus(at(totals, 1, "bare"));
        Count chip = at(totals, 0, "chip").plus(at(totals, 1, "chip"));
        assertTrue(z(bare, chip) > 6, "pooled z " + z(bare, chip));
        for (int epoch = 0; epoch < 2; epoch++) {
            double within = z("fare-chip", epoch, "bare", "chip");
            assertTrue(Math.abs(within) < 3, "epoch " + epoch + ": z " + within);
        }
    }

    @Test
    void splitOfTheCabinUpsellIsPlainlyBrokenAndOfTheOthersIsNot() {
        long day = Duration.ofDays(1).toMillis();
        long start = Northwater.START.toEpochMilli();
        Map<Stratum, Count> before = truth.get("cabin-upsell").totals(start + 2 * day);
        Map<Stratum, Count> after = truth.get("cabin-upsell").totals(start + 4 * day);
        assertTrue(splitZ(before, "seats", "offer") < 4);
        assertTrue(splitZ(after, "seats", "offer") > 7);
        assertTrue(splitZ(totals("quay-banner"), "plain", "wide") < 4);
        assertTrue(splitZ(totals("return-prompt"), "silent", "prompt") < 4);
    }

    @Test
    void rampAndThreeArmSplitsFitTheirPlans() {
        Map<Stratum, Count> ramp = totals("fare-chip");
        assertFits(new long[] {at(ramp, 0, "bare").trials(), at(ramp, 0, "chip").trials()}, 0.9, 0.1);
        assertFits(new long[] {at(ramp, 1, "bare").trials(), at(ramp, 1, "chip").trials()}, 0.5, 0.5);
        Map<Stratum, Count> deck = totals("deck-map");
        long[] arms = {
            at(deck, 0, "list").trials(),
            at(deck, 0, "chart").trials(),
            at(deck, 0, "tilt").trials()
        };
        assertFits(arms, 0.34, 0.33, 0.33);
    }

    @Test
    void ratesAreThePlannedOnes() {
        assertRate(0.120, at(totals("quay-banner"), 0, "plain"));
        assertRate(0.145, at(totals("quay-banner"), 0, "wide"));
        assertRate(0.150, at(totals("return-prompt"), 0, "silent"));
        assertRate(0.155, at(totals("deck-map"), 0, "tilt"));
    }

    private double miss(String experiment, String control, String challenger, double p0, double p1) {
        double n0 = at(totals(experiment), 0, control).trials();
        double n1 = at(totals(experiment), 0, challenger).trials();
        double p = (n0 * p0 + n1 * p1) / (n0 + n1);
        double mean = Math.abs(p1 - p0) / Math.sqrt(p * (1 - p) * (1 / n0 + 1 / n1));
        return NORMAL.cumulativeProbability(LAST_BOUNDARY - mean);
    }

    private double z(String experiment, int epoch, String control, String challenger) {
        Map<Stratum, Count> totals = totals(experiment);
        return z(at(totals, epoch, control), at(totals, epoch, challenger));
    }

    private static double z(Count control, Count challenger) {
        double n0 = control.trials();
        double n1 = challenger.trials();
        double p = (control.successes() + challenger.successes()) / (n0 + n1);
        double difference = challenger.successes() / n1 - control.successes() / n0;
        return difference / Math.sqrt(p * (1 - p) * (1 / n0 + 1 / n1));
    }

    private static double splitZ(Map<Stratum, Count> totals, String one, String other) {
        double n0 = at(totals, 0, one).trials();
        double n1 = at(totals, 0, other).trials();
        return Math.abs(n0 - n1) / Math.sqrt(n0 + n1);
    }

    private static void assertFits(long[] observed, double... shares) {
        double all = Arrays.stream(observed).sum();
        double chiSquare = 0;
        for (int i = 0; i < observed.length; i++) {
            chiSquare += Math.pow(observed[i] - all * shares[i], 2) / (all * shares[i]);
        }
        double p = 1 - new ChiSquaredDistribution(observed.length - 1).cumulativeProbability(chiSquare);
        assertTrue(p > 1e-4, "p " + p + " of " + Arrays.toString(observed));
    }

    /** Four standard errors of a rate near 0.15 in 20,000 units are 0.010; the twists move it by less than 0.001. */
    private static void assertRate(double planned, Count count) {
        assertEquals(planned, (double) count.successes() / count.trials(), 0.011);
    }

    private Map<Stratum, Count> totals(String experiment) {
        return truth.get(experiment).totals(Long.MAX_VALUE);
    }

    private static Count at(Map<Stratum, Count> totals, int epoch, String variant) {
        return totals.getOrDefault(new Stratum(epoch, variant), Count.NONE);
    }
}
