package io.tallyward.statistics.multiplicity;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertThrows;
import static org.junit.jupiter.api.Assertions.assertTrue;

import java.util.ArrayList;
import java.util.Arrays;
import java.util.Collections;
import java.util.List;
import java.util.Map;
import java.util.Random;
import java.util.Set;
import java.util.SortedMap;
import java.util.TreeSet;
import org.apache.commons.math3.linear.LUDecomposition;
import org.apache.commons.math3.linear.MatrixUtils;
import org.apache.commons.math3.linear.RealMatrix;
import org.junit.jupiter.api.Test;

class AlphaGraphTest {

    /** Relative to alpha; a few roundings per rejection. */
    private static final double ROUNDING = 1e-13;

    private static final double ALPHA = 0.05;
    private static final long SEED = 2009;

    @Test
    void splitsEvenlyBeforeAnyRejection() {
        for (AlphaGraph graph : List.of(AlphaGraph.bonferroni(4), AlphaGraph.holm(4))) {
            assertEquals(Map.of(0, ALPHA / 4, 1, ALPHA / 4, 2, ALPHA / 4, 3, ALPHA / 4), graph.levels(ALPHA, Set.of()));
        }
    }

    @Test
    void bonferroniPassesNothingOn() {
        assertEquals(
                Map.of(0, ALPHA / 4, 3, ALPHA / 4), AlphaGraph.bonferroni(4).levels(ALPHA, Set.of(1, 2)));
    }

    /** Holm (1979): with r rejected of m, the others are tested at alpha / (m - r). */
    @Test
    void holmSharesAmongThoseThatAreLeft() {
        AlphaGraph graph = AlphaGraph.holm(5);
        List<Integer> order = new ArrayList<>(List.of(3, 0, 4, 1, 2));
        for (int r = 0; r < 5; r++) {
            SortedMap<Integer, Double> levels = graph.levels(ALPHA, Set.copyOf(order.subList(0, r)));
            assertEquals(5 - r, levels.size());
            for (double level : levels.values()) {
                assertEquals(ALPHA / (5 - r), level, ROUNDING * ALPHA);
            }
        }
        assertTrue(graph.levels(ALPHA, Set.of(0, 1, 2, 3, 4)).isEmpty());
    }

    @Test
    void fixedSequenceTestsOneAfterTheOther() {
        AlphaGraph graph = AlphaGraph.fixedSequence(3);
        assertEquals(Map.of(0, ALPHA, 1, 0.0, 2, 0.0), graph.levels(ALPHA, Set.of()));
        assertEquals(Map.of(1, ALPHA, 2, 0.0), graph.levels(ALPHA, Set.of(0)));
        assertEquals(Set.of(0), graph.rejections(ALPHA, 0.01, 0.2, 0));
        assertEquals(Set.of(0, 1, 2), graph.rejections(ALPHA, 0.05, 0.05, 0.05));
    }

    /**
     * Another way to the same levels: a rejected hypothesis sends its weight on a random walk along the transitions, which
     * ends at the first hypothesis that is still open. Absorption probabilities solve a linear system.
     */
    @Test
    void levelsAreThoseOfARandomWalkUntilAbsorption() {
        Random random = new Random(SEED);
        for (int run = 0; run < 300; run++) {
            int size = 2 + random.nextInt(6);
            AlphaGraph graph = anyGraph(random, size);
            Set<Integer> rejected = new TreeSet<>();
            for (int i = 0; i < size; i++) {
                if (random.nextBoolean()) {
                    rejected.add(i);
                }
            }
            double[] expected = absorbed(graph, new ArrayList<>(rejected));
            String where = "seed " + SEED + ", run " + run;
            graph.levels(ALPHA, rejected)
                    .forEach((i, level) -> assertEquals(ALPHA * expected[i], level, ROUNDING * ALPHA, where));
        }
    }

    @Test
    void levelsNeverFallAndNeverAddUpToMoreThanAlpha() {
        Random random = new Random(SEED);
        for (int run = 0; run < 300; run++) {
            int size = 1 + random.nextInt(8);
            AlphaGraph graph = anyGraph(random, size);
            List<Integer> order = new ArrayList<>();
            for (int i = 0; i < size; i++) {
                order.add(i);
            }
            Collections.shuffle(order, random);
            SortedMap<Integer, Double> before = graph.levels(ALPHA, Set.of());
            for (int r = 1; r <= size; r++) {
                SortedMap<Integer, Double> now = graph.levels(ALPHA, Set.copyOf(order.subList(0, r)));
                String where = "seed " + SEED + ", run " + run;
                double sum = now.values().stream().mapToDouble(x -> x).sum();
                assertTrue(sum <= ALPHA * (1 + 1e-12), where);
                for (int i : now.keySet()) {
                    assertTrue(now.get(i) >= before.get(i) - ROUNDING * ALPHA, where);
                }
                before = now;
            }
        }
    }

    /** Two that pass everything to each other: what is left when both are gone is lost, not divided by zero. */
    @Test
    void losesWhatHasNowhereToGo() {
        AlphaGraph graph = new AlphaGraph(
                List.of(0.5, 0.5, 0.0),
                List.of(List.of(0.0, 1.0, 0.0), List.of(1.0, 0.0, 0.0), List.of(0.0, 0.0, 0.0)));
        assertEquals(Map.of(1, ALPHA, 2, 0.0), graph.levels(ALPHA, Set.of(0)));
        assertEquals(Map.of(2, 0.0), graph.levels(ALPHA, Set.of(0, 1)));
    }

    @Test
    void refusesSharesThatAreNone() {
        List<List<Double>> none = List.of(List.of(0.0, 0.0), List.of(0.0, 0.0));
        assertThrows(IllegalArgumentException.class, () -> new AlphaGraph(List.of(), List.of()));
        assertThrows(IllegalArgumentException.class, () -> new AlphaGraph(List.of(0.5, 0.6), none));
        assertThrows(IllegalArgumentException.class, () -> new AlphaGraph(List.of(0.5, Double.NaN), none));
        assertThrows(IllegalArgumentException.class, () -> new AlphaGraph(List.of(0.5, -0.1), none));
        assertThrows(
                IllegalArgumentException.class,
                () -> new AlphaGraph(List.of(0.5, 0.5), List.of(List.of(0.5, 0.5), List.of(0.0, 0.0))));
        assertThrows(IllegalArgumentException.class, () -> AlphaGraph.holm(2).levels(1, Set.of()));
        assertThrows(IllegalArgumentException.class, () -> AlphaGraph.holm(2).levels(ALPHA, Set.of(2)));
        assertThrows(IllegalArgumentException.class, () -> AlphaGraph.holm(2).rejections(ALPHA, 0.1));
        assertThrows(IllegalArgumentException.class, () -> AlphaGraph.holm(0));
    }

    private static AlphaGraph anyGraph(Random random, int size) {
        List<List<Double>> transitions = new ArrayList<>();
        for (int j = 0; j < size; j++) {
            transitions.add(shares(random, size, j));
        }
        return new AlphaGraph(shares(random, size, -1), transitions);
    }

    private static List<Double> shares(Random random, int size, int none) {
        Double[] shares = new Double[size];
        double sum = 0.05;
        for (int i = 0; i < size; i++) {
            shares[i] = i == none || random.nextInt(4) == 0 ? 0 : random.nextDouble();
            sum += shares[i];
        }
        for (int i = 0; i < size; i++) {
            shares[i] /= sum;
        }
        return Arrays.asList(shares);
    }

    private static double[] absorbed(AlphaGraph graph, List<Integer> rejected) {
        double[] weight = graph.weights().stream().mapToDouble(x -> x).toArray();
        if (rejected.isEmpty()) {
            return weight;
        }
        int size = rejected.size();
        RealMatrix stay = MatrixUtils.createRealIdentityMatrix(size);
        double[] start = new double[size];
        for (int a = 0; a < size; a++) {
            start[a] = weight[rejected.get(a)];
            for (int b = 0; b < size; b++) {
                stay.addToEntry(b, a, -graph.transitions().get(rejected.get(a)).get(rejected.get(b)));
            }
        }
        double[] visits = new LUDecomposition(stay)
                .getSolver()
                .solve(MatrixUtils.createRealVector(start))
                .toArray();
        for (int i = 0; i < weight.length; i++) {
            for (int a = 0; a < size; a++) {
                weight[i] +=
                        visits[a] * graph.transitions().get(rejected.get(a)).get(i);
            }
        }
        return weight;
    }
}
