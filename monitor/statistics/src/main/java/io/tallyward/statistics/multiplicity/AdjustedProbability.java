package io.tallyward.statistics.multiplicity;

import java.util.Comparator;
import java.util.stream.IntStream;

/**
 * P-values adjusted for their number: a hypothesis is rejected at family-wise level alpha if its adjusted p-value is at
 * most alpha. Valid under any dependence between them.
 */
public enum AdjustedProbability {

    /** {@code min(1, m p)}: simple, and each adjusted value depends on its own p only. */
    BONFERRONI {
        @Override
        double[] adjust(double[] p, int[] order) {
            double[] adjusted = new double[p.length];
            for (int i = 0; i < p.length; i++) {
                adjusted[i] = StrictMath.min(1, p.length * p[i]);
            }
            return adjusted;
        }
    },

    /**
     * Step-down, with p-values in ascending order {@code max over j <= i of min(1, (m - j + 1) p_j)}: Holm, "A simple
     * sequentially rejective multiple test procedure", Scandinavian Journal of Statistics 6 (1979) 65-70. Rejects whatever
     * Bonferroni does, and more.
     */
    HOLM {
        @Override
        double[] adjust(double[] p, int[] order) {
            double[] adjusted = new double[p.length];
            double largest = 0;
            for (int i = 0; i < order.length; i++) {
                largest = StrictMath.max(largest, StrictMath.min(1, (p.length - i) * p[order[i]]));
                adjusted[order[i]] = largest;
            }
            return adjusted;
        }
    };

    /**
     * Adjusts.
     *
     * @param p p-values, each in [0, 1]; unchanged
     * @return as many, in the order given, each in [0, 1]; one rounding each
     * @throws IllegalArgumentException if one is not a probability
     */
    public double[] of(double... p) {
        for (int i = 0; i < p.length; i++) {
            if (!(p[i] >= 0 && p[i] <= 1)) {
                throw new IllegalArgumentException("p[" + i + "]: " + p[i] + " (expected: in [0, 1])");
            }
        }
        int[] order = IntStream.range(0, p.length)
                .boxed()
                .sorted(Comparator.comparingDouble(i -> p[i]))
                .mapToInt(Integer::intValue)
                .toArray();
        return adjust(p, order);
    }

    abstract double[] adjust(double[] p, int[] order);
}
