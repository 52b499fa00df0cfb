package io.tallyward.engine.count;

import io.tallyward.engine.count.WindowTally.Cell;
import io.tallyward.engine.plan.Plan;
import java.util.ArrayList;
import java.util.List;

/** Trials and successes of one window by allocation epoch and variant. */
final class CellCounts {

    private final Plan plan;
    private final int variants;
    private final long[] trials;
    private final long[] successes;

    CellCounts(Plan plan) {
        this.plan = plan;
        variants = plan.variants().size();
        trials = new long[(plan.epochs().size() + 1) * variants];
        successes = new long[trials.length];
    }

    void add(int variant, long first, boolean success) {
        int cell = plan.epochAt(first) * variants + variant;
        trials[cell]++;
        successes[cell] += success ? 1 : 0;
    }

    /** Only cells with trials. */
    List<Cell> list() {
        List<Cell> cells = new ArrayList<>();
        for (int cell = 0; cell < trials.length; cell++) {
            if (trials[cell] > 0) {
                cells.add(Cell.ofUnits(cell / variants, cell % variants, trials[cell], successes[cell]));
            }
        }
        return cells;
    }
}
