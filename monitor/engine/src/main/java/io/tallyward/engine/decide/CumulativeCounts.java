package io.tallyward.engine.decide;

import io.tallyward.engine.count.WindowTally.Cell;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.record.DecisionRecord.VariantCount;
import io.tallyward.statistics.proportion.Stratum;
import java.io.DataInput;
import java.io.DataOutput;
import java.io.IOException;
import java.util.ArrayList;
import java.util.List;

/** Trials and successes of the complete windows, by allocation epoch and variant. */
final class CumulativeCounts {

    private final Plan plan;
    private final int variants;
    private final long[][] trials;
    private final long[][] successes;

    CumulativeCounts(Plan plan) {
        this.plan = plan;
        variants = plan.variants().size();
        trials = new long[plan.epochs().size() + 1][variants];
        successes = new long[plan.epochs().size() + 1][variants];
    }

    void add(Cell cell) {
        trials[cell.epoch()][cell.variant()] += cell.trials();
        successes[cell.epoch()][cell.variant()] += cell.successes();
    }

    int epochs() {
        return trials.length;
    }

    /** Trials of each variant during an epoch, in the plan's order. */
    long[] trialsIn(int epoch) {
        return trials[epoch].clone();
    }

    long trials(int variant) {
        long sum = 0;
        for (long[] epoch : trials) {
            sum += epoch[variant];
        }
        return sum;
    }

    long successes(int variant) {
        long sum = 0;
        for (long[] epoch : successes) {
            sum += epoch[variant];
        }
        return sum;
    }

    /** The comparison of a variant with the control, one stratum per epoch. */
    List<Stratum> strata(int variant) {
        int control = plan.variantIndex(plan.control().name());
        List<Stratum> strata = new ArrayList<>();
        for (int epoch = 0; epoch < trials.length; epoch++) {
            strata.add(new Stratum(
                    successes[epoch][variant],
                    trials[epoch][variant],
                    successes[epoch][control],
                    trials[epoch][control]));
        }
        return strata;
    }

    /** All counts, by epoch then variant; epochs that have not begun are left out. */
    List<VariantCount> list() {
        List<VariantCount> list = new ArrayList<>();
        for (int epoch = 0; epoch < trials.length; epoch++) {
            if (epoch == 0 || anyTrials(epoch)) {
                for (int variant = 0; variant < variants; variant++) {
                    list.add(new VariantCount(
                            epoch,
                            plan.variants().get(variant).name(),
                            trials[epoch][variant],
                            successes[epoch][variant]));
                }
            }
        }
        return list;
    }

    private boolean anyTrials(int epoch) {
        for (long count : trials[epoch]) {
            if (count > 0) {
                return true;
            }
        }
        return false;
    }

    void write(DataOutput out) throws IOException {
        for (int epoch = 0; epoch < trials.length; epoch++) {
            for (int variant = 0; variant < variants; variant++) {
                out.writeLong(trials[epoch][variant]);
                out.writeLong(successes[epoch][variant]);
            }
        }
    }

    void read(DataInput in) throws IOException {
        for (int epoch = 0; epoch < trials.length; epoch++) {
            for (int variant = 0; variant < variants; variant++) {
                trials[epoch][variant] = in.readLong();
                successes[epoch][variant] = in.readLong();
            }
        }
    }
}
