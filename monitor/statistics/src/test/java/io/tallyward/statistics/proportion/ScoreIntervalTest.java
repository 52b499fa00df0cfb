package io.tallyward.statistics.proportion;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertTrue;

import java.util.Random;
import org.junit.jupiter.api.Test;

class ScoreIntervalTest {

    private static final long SEED = 1985;

    /** Absolute; the grid search of the oracle does no better. */
    private static final double GRID = 1e-7;

    private static final double CONFIDENCE = 0.95;

    /** The two-sided 5 percent point to the digits every table prints. */
    private static final double Z = 1.959963984540054;

    /** A slower method: the likelihood maximised over a fine grid, refined three times, at the ends found. */
    @Test
    void miettinenNurminenEndsAreWhereTheScoreReachesItsLimit() {
        Random random = new Random(SEED);
        for (int run = 0; run < 40; run++) {
            Stratum counts = anyCounts(random, 60);
            Interval found = ScoreInterval.miettinenNurminen(counts, CONFIDENCE).orElseThrow();
            String where = "seed " + SEED + ", run " + run + ", " + counts;
            double d = RateDifference.of(counts).orElseThrow().value();
            if (found.upper() < 1) {
                assertEquals(Z, (found.upper() - d) / gridError(counts, found.upper()), GRID * 100, where);
            }
            if (found.lower() > -1) {
                assertEquals(Z, (d - found.lower()) / gridError(counts, found.lower()), GRID * 100, where);
            }
        }
    }

    @Test
    void intervalsMirrorWhenArmsAreSwapped() {
        Random random = new Random(SEED);
        for (int run = 0; run < 500; run++) {
            Stratum counts = anyCounts(random, 1L << (1 + random.nextInt(50)));
            String where = "seed " + SEED + ", run " + run + ", " + counts;
            Interval newcombe = ScoreInterval.newcombe(counts, 0.9).orElseThrow();
            Interval mirrored =
                    ScoreInterval.newcombe(ScoreInterval.swapped(counts), 0.9).orElseThrow();
            assertEquals(newcombe.lower(), -mirrored.upper(), where);
            Interval score = ScoreInterval.miettinenNurminen(counts, 0.9).orElseThrow();
            Interval mirroredScore = ScoreInterval.miettinenNurminen(ScoreInterval.swapped(counts), 0.9)
                    .orElseThrow();
            assertEquals(score.lower(), -mirroredScore.upper(), where);
            assertTrue(score.lower() >= -1 && score.upper() <= 1, where);
        }
    }

    /** Success and failure are names only, so renaming them changes the sign and, but for rounding, nothing else. */
    @Test
    void intervalsMirrorWhenSuccessAndFailureAreSwapped() {
        Random random = new Random(SEED);
        for (int run = 0; run < 500; run++) {
            Stratum counts = anyCounts(random, 1L << (1 + random.nextInt(50)));
            Stratum renamed = new Stratum(
                    counts.trials() - counts.successes(),
                    counts.trials(),
                    counts.controlTrials() - counts.controlSuccesses(),
                    counts.controlTrials());
            String where = "seed " + SEED + ", run " + run + ", " + counts;
            Interval score = ScoreInterval.miettinenNurminen(counts, 0.9).orElseThrow();
            Interval mirrored = ScoreInterval.miettinenNurminen(renamed, 0.9).orElseThrow();
            double tolerance = 1e-11 * (score.upper() - score.lower()) + 1e-15;
            assertEquals(score.lower(), -mirrored.upper(), tolerance, where);
            assertEquals(score.upper(), -mirrored.lower(), tolerance, where);
        }
    }

    @Test
    void intervalsWidenWithConfidenceAndContainTheEstimate() {
        Random random = new Random(SEED);
        for (int run = 0; run < 200; run++) {
            Stratum counts = anyCounts(random, 1000);
            double d = RateDifference.of(counts).orElseThrow().value();
            Interval before = new Interval(d, d);
            for (double confidence : new double[] {1e-9, 0.5, 0.8, 0.95, 0.999, 1 - 1e-12}) {
                Interval score =
                        ScoreInterval.miettinenNurminen(counts, confidence).orElseThrow();
                String where = "seed " + SEED + ", run " + run + ", " + counts + " at " + confidence;
                assertTrue(score.lower() <= before.lower() + 1e-15 && score.upper() >= before.upper() - 1e-15, where);
                before = score;
            }
        }
    }

    @Test
    void staysWithinItsRangeForCountsOfAllSizes() {
        long most = 1L << 53;
        long[][] extremes = {
            {0, 1, most, most}, {most, most, 0, 1}, {1, 1, 0, most}, {1, most, most - 1, most}, {most / 2, most, 1, 2}
        };
        for (long[] c : extremes) {
            Stratum counts = new Stratum(c[0], c[1], c[2], c[3]);
            Interval score = ScoreInterval.miettinenNurminen(counts, CONFIDENCE).orElseThrow();
            Interval newcombe = ScoreInterval.newcombe(counts, CONFIDENCE).orElseThrow();
            assertTrue(score.lower() >= -1 && score.upper() <= 1, counts.toString());
            assertTrue(newcombe.lower() >= -1 && newcombe.upper() <= 1, counts.toString());
        }
    }

    @Test
    void isEmptyWithoutTrials() {
        assertTrue(ScoreInterval.wilson(0, 0, CONFIDENCE).isEmpty());
        assertTrue(ScoreInterval.newcombe(new Stratum(0, 0, 1, 2), CONFIDENCE).isEmpty());
        assertTrue(ScoreInterval.miettinenNurminen(new Stratum(1, 2, 0, 0), CONFIDENCE)
                .isEmpty());
    }

    private static Stratum anyCounts(Random random, long most) {
        long trials = 1 + (long) (random.nextDouble() * most);
        long control = 1 + (long) (random.nextDouble() * most);
        return new Stratum(
                Math.round(random.nextDouble() * trials), trials, Math.round(random.nextDouble() * control), control);
    }

    private static double gridError(Stratum counts, double d) {
        double from = Math.max(0, -d);
        double to = Math.min(1, 1 - d);
        double best = from;
        for (int refinement = 0; refinement < 4; refinement++) {
            double step = (to - from) / 400;
            double most = Double.NEGATIVE_INFINITY;
            double start = from;
            for (int i = 0; i <= 400; i++) {
                double likelihood = logLikelihood(counts, start + i * step, d);
                if (likelihood > most) {
                    most = likelihood;
                    best = start + i * step;
                }
            }
            from = Math.max(from, best - 2 * step);
            to = Math.min(to, best + 2 * step);
        }
        double all = counts.trials() + counts.controlTrials();
        double variance = (best + d) * (1 - best - d) / counts.trials() + best * (1 - best) / counts.controlTrials();
        return Math.sqrt(variance * all / (all - 1));
    }

    private static double logLikelihood(Stratum counts, double p0, double d) {
        return term(counts.successes(), p0 + d)
                + term(counts.trials() - counts.successes(), 1 - p0 - d)
                + term(counts.controlSuccesses(), p0)
                + term(counts.controlTrials() - counts.controlSuccesses(), 1 - p0);
    }

    private static double term(long count, double rate) {
        return count == 0 ? 0 : count * Math.log(rate);
    }
}
