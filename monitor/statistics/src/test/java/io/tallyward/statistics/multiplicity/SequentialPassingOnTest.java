package io.tallyward.statistics.multiplicity;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.statistics.boundary.BoundarySequence;
import io.tallyward.statistics.spending.SpendingFunction;
import java.util.HashMap;
import java.util.Map;
import java.util.Random;
import java.util.Set;
import java.util.TreeSet;
import org.junit.jupiter.api.Test;

/**
 * Maurer and Bretz (2013) played through: three variants against one control, four looks, one-sided, O'Brien-Fleming type
 * spending at the level of the moment.
 */
class SequentialPassingOnTest {

    private static final long SEED = 2013;
    private static final int RUNS = 40_000;
    private static final double ALPHA = 0.05;
    private static final double[] FRACTIONS = {0.25, 0.5, 0.75, 1};

    /** Three standard deviations of a share near alpha. */
    private static final double NOISE = 3 * Math.sqrt(ALPHA * (1 - ALPHA) / RUNS);

    private final Map<Double, double[]> boundaries = new HashMap<>();

    @Test
    void keepsTheErrorOfTheFamilyWithoutAnyEffect() {
        int[] rejected = play(AlphaGraph.holm(3), 0, 0, 0);
        assertTrue(rejected[0] <= (ALPHA + NOISE) * RUNS, "seed " + SEED + ", any of three: " + rejected[0]);
    }

    @Test
    void keepsTheErrorOfTheFamilyBesideAnEffect() {
        int[] rejected = play(AlphaGraph.holm(3), 4, 0, 0);
        assertTrue(rejected[1] > 0.9 * RUNS, "the effect is found: " + rejected[1]);
        int[] falsely = play(AlphaGraph.holm(3), 4, 4, 0);
        assertEquals(ALPHA, (double) falsely[3] / RUNS, NOISE, "seed " + SEED + ": the one without gets nearly all");
    }

    @Test
    void rejectsMoreThanTheEvenSplit() {
        int[] split = play(AlphaGraph.bonferroni(3), 2.5, 2.5, 2.5);
        int[] passing = play(AlphaGraph.holm(3), 2.5, 2.5, 2.5);
        for (int i = 1; i <= 3; i++) {
            assertTrue(passing[i] > split[i] * 1.05, "seed " + SEED + ", variant " + i);
        }
    }

    /** Counts of runs: with any rejection of a variant without effect, then with a rejection of each variant. */
    private int[] play(AlphaGraph graph, double... drift) {
        Random random = new Random(SEED);
        int[] counts = new int[drift.length + 1];
        for (int run = 0; run < RUNS; run++) {
            Set<Integer> rejected = playOnce(graph, drift, random);
            boolean wrong = false;
            for (int i : rejected) {
                counts[i + 1]++;
                wrong |= drift[i] == 0;
            }
            counts[0] += wrong ? 1 : 0;
        }
        return counts;
    }

    private Set<Integer> playOnce(AlphaGraph graph, double[] drift, Random random) {
        double[] path = new double[drift.length];
        Set<Integer> rejected = new TreeSet<>();
        double last = 0;
        for (int look = 0; look < FRACTIONS.length; look++) {
            double step = FRACTIONS[look] - last;
            last = FRACTIONS[look];
            double control = random.nextGaussian();
            for (int i = 0; i < path.length; i++) {
                double noise = (random.nextGaussian() - control) * Math.sqrt(step / 2);
                path[i] += drift[i] * step + noise;
            }
            rejectAtLook(graph, look, path, rejected);
        }
        return rejected;
    }

    private void rejectAtLook(AlphaGraph graph, int look, double[] path, Set<Integer> rejected) {
        boolean more = true;
        while (more) {
            more = false;
            for (var level : graph.levels(ALPHA, rejected).entrySet()) {
                double z = path[level.getKey()] / Math.sqrt(FRACTIONS[look]);
                if (z >= boundaries.computeIfAbsent(level.getValue(), SequentialPassingOnTest::boundaries)[look]) {
                    more = rejected.add(level.getKey());
                }
            }
        }
    }

    private static double[] boundaries(double level) {
        BoundarySequence sequence = new BoundarySequence();
        double[] upper = new double[FRACTIONS.length];
        for (int i = 0; i < upper.length; i++) {
            double spent = SpendingFunction.obrienFlemingType().spent(level, FRACTIONS[i]);
            upper[i] = sequence.next(FRACTIONS[i], spent, 0).upper();
        }
        return upper;
    }
}
