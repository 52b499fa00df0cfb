package io.tallyward.statistics.multiplicity;

import java.util.ArrayList;
import java.util.Collections;
import java.util.List;
import java.util.Set;
import java.util.SortedMap;
import java.util.SortedSet;
import java.util.TreeMap;
import java.util.TreeSet;

/**
 * How alpha is shared among hypotheses and passed on when some are rejected: a small weighted graph. Bretz, Maurer,
 * Brannath and Posch, "A graphical approach to sequentially rejective multiple test procedures", Statistics in Medicine 28
 * (2009) 586-604, algorithm 1; for group-sequential tests Maurer and Bretz, "Multiple testing in group sequential trials
 * using graphical approaches", Statistics in Biopharmaceutical Research 5 (2013) 311-320 (both from memory; checked against
 * the closed form of absorption and Holm's procedure).
 *
 * <p>Rejecting hypothesis {@code j} gives every other {@code l} the weight {@code w_l + w_j g_jl} and the transitions
 * {@code g_lk <- (g_lk + g_lj g_jk) / (1 - g_lj g_jl)}, or 0 where nothing is left to divide by. The order of rejections does
 * not matter.
 *
 * <p>In a group-sequential test each hypothesis keeps its own spending function, evaluated at its level of the moment.
 * When a level grows, boundaries of looks to come are those of a test that had the larger level from the start; a
 * hypothesis is rejected when it reaches the boundary of its latest look. Levels never fall, so a rejection stands.
 *
 * <p>Levels have relative error below 1e-13. Rejecting costs the square of the number of hypotheses.
 *
 * @param weights share of alpha that each hypothesis starts with; each in [0, 1], at most 1 together
 * @param transitions row j: which share of its level hypothesis j passes to each when rejected; each in [0, 1], at most 1
 *     per row, 0 to itself
 */
public record AlphaGraph(List<Double> weights, List<List<Double>> transitions) {

    /** What sums may exceed 1 by: shares like a third are rounded. */
    private static final double SLACK = 1e-12;

    /** Below this a denominator is rounding: hypotheses j and l pass everything to each other. */
    private static final double NOTHING_LEFT = 1e-12;

    private static final int MOST = 200;

    public AlphaGraph {
        weights = List.copyOf(weights);
        transitions = transitions.stream().map(List::copyOf).toList();
        int size = weights.size();
        if (size < 1 || size > MOST || transitions.size() != size) {
            throw new IllegalArgumentException("weights, transitions: " + size + ", " + transitions.size()
                    + " entries (expected: as many of each, from 1 to " + MOST + ")");
        }
        requireShares("weights", weights, size);
        for (int j = 0; j < size; j++) {
            requireShares("transitions[" + j + "]", transitions.get(j), size);
            if (transitions.get(j).get(j) != 0) {
                throw new IllegalArgumentException("transitions[" + j + "][" + j + "]: "
                        + transitions.get(j).get(j) + " (expected: 0, nothing is passed to itself)");
            }
        }
    }

    /**
     * Even shares, nothing passed on: Bonferroni's split.
     *
     * @param hypotheses number of them, from 1 to 200
     */
    public static AlphaGraph bonferroni(int hypotheses) {
        return even(hypotheses, 0);
    }

    /**
     * Even shares, passed on evenly: Holm's procedure (1979).
     *
     * @param hypotheses number of them, from 1 to 200
     */
    public static AlphaGraph holm(int hypotheses) {
        return even(hypotheses, hypotheses > 1 ? 1.0 / (hypotheses - 1) : 0);
    }

    /**
     * All to the first, and on to the next when it is rejected: tests in a fixed order.
     *
     * @param hypotheses number of them, from 1 to 200
     */
    public static AlphaGraph fixedSequence(int hypotheses) {
        requireSize(hypotheses);
        List<Double> weights = new ArrayList<>(Collections.nCopies(hypotheses, 0.0));
        weights.set(0, 1.0);
        List<List<Double>> transitions = new ArrayList<>();
        for (int j = 0; j < hypotheses; j++) {
            List<Double> row = new ArrayList<>(Collections.nCopies(hypotheses, 0.0));
            if (j + 1 < hypotheses) {
                row.set(j + 1, 1.0);
            }
            transitions.add(row);
        }
        return new AlphaGraph(weights, transitions);
    }

    /**
     * The level of every hypothesis that is still open.
     *
     * @param alpha family-wise level, in (0, 1)
     * @param rejected numbers of the rejected hypotheses, from 0
     * @return level by number; absent if rejected; 0 if nothing has been passed to it yet
     */
    public SortedMap<Integer, Double> levels(double alpha, Set<Integer> rejected) {
        requireAlpha(alpha);
        AlphaFlow flow = new AlphaFlow(this);
        for (int hypothesis : new TreeSet<>(rejected)) {
            requireKnown(hypothesis);
            flow.reject(hypothesis);
        }
        SortedMap<Integer, Double> levels = new TreeMap<>();
        for (int i = 0; i < weights.size(); i++) {
            if (!rejected.contains(i)) {
                levels.put(i, alpha * StrictMath.min(1, flow.weight(i)));
            }
        }
        return levels;
    }

    /**
     * All hypotheses that a single reading rejects: those with a p-value at or below their level, until no more are.
     *
     * @param alpha family-wise level, in (0, 1)
     * @param p one p-value per hypothesis, each in [0, 1]
     */
    public SortedSet<Integer> rejections(double alpha, double... p) {
        if (p.length != weights.size()) {
            throw new IllegalArgumentException("p: " + p.length + " entries (expected: " + weights.size() + ")");
        }
        for (int i = 0; i < p.length; i++) {
            if (!(p[i] >= 0 && p[i] <= 1)) {
                throw new IllegalArgumentException("p[" + i + "]: " + p[i] + " (expected: in [0, 1])");
            }
        }
        SortedSet<Integer> rejected = new TreeSet<>();
        boolean more = true;
        while (more) {
            more = false;
            for (var level : levels(alpha, rejected).entrySet()) {
                // without a level there is no test, not even of a p-value of 0
                if (level.getValue() > 0 && p[level.getKey()] <= level.getValue()) {
                    more = rejected.add(level.getKey());
                }
            }
        }
        return rejected;
    }

    /** Weights and transitions while hypotheses drop out; confined to one call. */
    private static final class AlphaFlow {
        private final double[] weight;
        private final double[][] passed;

        AlphaFlow(AlphaGraph graph) {
            weight = array(graph.weights);
            passed = graph.transitions.stream().map(AlphaGraph::array).toArray(double[][]::new);
        }

        double weight(int hypothesis) {
            return weight[hypothesis];
        }

        void reject(int j) {
            int size = weight.length;
            for (int l = 0; l < size; l++) {
                weight[l] += l == j ? 0 : weight[j] * passed[j][l];
            }
            for (int l = 0; l < size; l++) {
                double rest = 1 - passed[l][j] * passed[j][l];
                for (int k = 0; k < size && l != j; k++) {
                    if (k != j && k != l) {
                        passed[l][k] = rest > NOTHING_LEFT ? (passed[l][k] + passed[l][j] * passed[j][k]) / rest : 0;
                    }
                }
                passed[l][j] = 0;
            }
            weight[j] = 0;
            passed[j] = new double[size];
        }
    }

    private static AlphaGraph even(int hypotheses, double passed) {
        requireSize(hypotheses);
        List<List<Double>> transitions = new ArrayList<>();
        for (int j = 0; j < hypotheses; j++) {
            List<Double> row = new ArrayList<>(Collections.nCopies(hypotheses, passed));
            row.set(j, 0.0);
            transitions.add(row);
        }
        return new AlphaGraph(Collections.nCopies(hypotheses, 1.0 / hypotheses), transitions);
    }

    private static double[] array(List<Double> values) {
        return values.stream().mapToDouble(Double::doubleValue).toArray();
    }

    private static void requireSize(int hypotheses) {
        if (hypotheses < 1 || hypotheses > MOST) {
            throw new IllegalArgumentException("hypotheses: " + hypotheses + " (expected: from 1 to " + MOST + ")");
        }
    }

    private static void requireAlpha(double alpha) {
        if (!(alpha > 0 && alpha < 1)) {
            throw new IllegalArgumentException("alpha: " + alpha + " (expected: in (0, 1))");
        }
    }

    private void requireKnown(int hypothesis) {
        if (hypothesis < 0 || hypothesis >= weights.size()) {
            throw new IllegalArgumentException(
                    "rejected: " + hypothesis + " (expected: from 0 to " + (weights.size() - 1) + ")");
        }
    }

    private static void requireShares(String name, List<Double> shares, int size) {
        if (shares.size() != size) {
            throw new IllegalArgumentException(name + ": " + shares.size() + " entries (expected: " + size + ")");
        }
        double sum = 0;
        for (int i = 0; i < size; i++) {
            double share = shares.get(i);
            if (!(share >= 0 && share <= 1)) {
                throw new IllegalArgumentException(name + "[" + i + "]: " + share + " (expected: in [0, 1])");
            }
            sum += share;
        }
        if (!(sum <= 1 + SLACK)) {
            throw new IllegalArgumentException(name + ": " + sum + " in all (expected: at most 1)");
        }
    }
}
