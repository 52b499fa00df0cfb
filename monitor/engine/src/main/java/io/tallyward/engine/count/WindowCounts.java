package io.tallyward.engine.count;

import io.tallyward.engine.count.WindowTally.Cell;
import io.tallyward.engine.count.WindowTally.SegmentCell;
import io.tallyward.engine.plan.Plan;
import java.util.ArrayList;
import java.util.List;
import java.util.Optional;

/** The counts of one window, by allocation epoch and variant, and by segment if the plan names any. */
final class WindowCounts {

    private final Plan plan;
    private final int variants;
    private final Sums[] sums;
    private final Optional<SegmentCounts> bySegment;

    WindowCounts(Plan plan, Optional<SegmentTable> table) {
        this.plan = plan;
        variants = plan.variants().size();
        sums = new Sums[(plan.epochCount()) * variants];
        bySegment = table.map(known -> new SegmentCounts(plan, known));
    }

    private static final class Sums {
        private long units;
        private long trials;
        private long successes;
        private long trialSquares;
        private long products;
        private long successSquares;
    }

    /**
     * A unit that is one trial.
     *
     * @param segments code of the segments of its first exposure
     */
    void add(int variant, long first, boolean success, int segments) {
        add(variant, first, 0, 0, 1, success ? 1 : 0);
        begin(variant, first, segments);
    }

    /** A unit whose first exposure lies in this window. */
    void begin(int variant, long first, int segments) {
        if (bySegment.isPresent()) {
            bySegment.get().add(variant, first, segments);
        }
    }

    /**
     * A unit with further trials.
     *
     * @param first event time of the unit's first exposure, which decides on its epoch
     * @param trialsBefore its trials in the windows before
     * @param successesBefore its successes in the windows before
     * @param trials its trials in this window
     * @param successes its successes in this window
     */
    void add(int variant, long first, long trialsBefore, long successesBefore, long trials, long successes) {
        int cell = plan.epochAt(first) * variants + variant;
        Sums sum = sums[cell];
        if (sum == null) {
            sum = new Sums();
            sums[cell] = sum;
        }
        sum.units += trialsBefore == 0 && trials > 0 ? 1 : 0;
        sum.trials += trials;
        sum.successes += successes;
        sum.trialSquares += trials * (2 * trialsBefore + trials);
        sum.products += trialsBefore * successes + trials * successesBefore + trials * successes;
        sum.successSquares += successes * (2 * successesBefore + successes);
    }

    List<SegmentCell> segments() {
        return bySegment.map(SegmentCounts::list).orElse(List.of());
    }

    /** Only cells with trials. */
    List<Cell> cells() {
        List<Cell> cells = new ArrayList<>();
        for (int cell = 0; cell < sums.length; cell++) {
            Sums sum = sums[cell];
            if (sum != null && sum.trials > 0) {
                cells.add(new Cell(
                        cell / variants,
                        cell % variants,
                        sum.units,
                        sum.trials,
                        sum.successes,
                        sum.trialSquares,
                        sum.products,
                        sum.successSquares));
            }
        }
        return cells;
    }
}
