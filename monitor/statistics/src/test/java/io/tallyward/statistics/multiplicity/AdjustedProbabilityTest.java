package io.tallyward.statistics.multiplicity;

import static org.junit.jupiter.api.Assertions.assertArrayEquals;
import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertThrows;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.statistics.ReferenceTable;
import io.tallyward.statistics.ReferenceTable.Row;
import java.util.List;
import java.util.SortedSet;
import org.junit.jupiter.api.Test;

class AdjustedProbabilityTest {

    /** Absolute; one product, rounded once. */
    private static final double ROUNDING = 1e-15;

    @Test
    void agreesWithTheReference() {
        ReferenceTable.read("multi_arm_holm.csv").by("case_id").forEach((id, rows) -> {
            double[] p = column(rows, "p_value");
            assertArrayEquals(column(rows, "bonferroni_adjusted"), AdjustedProbability.BONFERRONI.of(p), ROUNDING, id);
            assertArrayEquals(column(rows, "holm_adjusted"), AdjustedProbability.HOLM.of(p), ROUNDING, id);
        });
    }

    @Test
    void holmsGraphRejectsWhatTheReferenceRejects() {
        ReferenceTable.read("multi_arm_holm.csv").by("case_id").forEach((id, rows) -> {
            SortedSet<Integer> rejected = AlphaGraph.holm(rows.size()).rejections(0.05, column(rows, "p_value"));
            for (int i = 0; i < rows.size(); i++) {
                boolean expected = Boolean.parseBoolean(rows.get(i).text("holm_reject_at_0.05"));
                assertEquals(expected, rejected.contains(i), id + " hypothesis " + (i + 1));
            }
        });
    }

    @Test
    void adjustsNothingIfThereIsNothing() {
        assertEquals(0, AdjustedProbability.HOLM.of().length);
        assertArrayEquals(new double[] {0.3}, AdjustedProbability.HOLM.of(0.3));
    }

    @Test
    void leavesItsArgumentAlone() {
        double[] p = {0.5, 0.01};
        AdjustedProbability.HOLM.of(p);
        assertArrayEquals(new double[] {0.5, 0.01}, p);
    }

    @Test
    void refusesWhatIsNoProbability() {
        for (double p : new double[] {-0.1, 1.1, Double.NaN, Double.POSITIVE_INFINITY}) {
            String message = assertThrows(IllegalArgumentException.class, () -> AdjustedProbability.HOLM.of(0.5, p))
                    .getMessage();
            assertTrue(message.startsWith("p[1]: " + p), message);
        }
    }

    private static double[] column(List<Row> rows, String column) {
        return rows.stream().mapToDouble(row -> row.number(column)).toArray();
    }
}
