package io.tallyward.engine.decide;

import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.record.DecisionRecord.Split;
import io.tallyward.statistics.split.PearsonSplit;
import io.tallyward.statistics.split.SequentialSplitTest;
import java.io.DataInput;
import java.io.DataOutput;
import java.io.IOException;
import java.util.Arrays;

/**
 * Watches the traffic split after every complete window. Each allocation epoch has its own evidence against its own planned
 * shares; the epochs' data are disjoint, so the product of their e-values is an e-value, and one over its largest value so
 * far is a p-value that may be read at any time (Ville's inequality).
 */
final class SplitWatch {

    /**
     * Concentration of the Dirichlet prior under the alternative. It puts the alternative's shares about 0.016 away from an
     * even plan (0.5 / sqrt(concentration + 1)), the size of the splits that broken pipelines produce.
     */
    static final double CONCENTRATION = 1000;

    private final Plan plan;
    private double logBayesFactor;
    private double largest;

    SplitWatch(Plan plan) {
        this.plan = plan;
    }

    /** Reads the split again. */
    void observe(CumulativeCounts counts) {
        double sum = 0;
        for (int epoch = 0; epoch < counts.epochs(); epoch++) {
            sum += SequentialSplitTest.logBayesFactor(CONCENTRATION, plan.sharesIn(epoch), counts.trialsIn(epoch));
        }
        logBayesFactor = sum;
        largest = Math.max(largest, sum);
    }

    /** The sequential p-value, in (0, 1]; it never rises. */
    double sequentialPValue() {
        return Math.min(1, Math.exp(-largest));
    }

    Split split(CumulativeCounts counts) {
        PearsonSplit pearson = PearsonSplit.NONE;
        for (int epoch = 0; epoch < counts.epochs(); epoch++) {
            long[] trials = counts.trialsIn(epoch);
            if (Arrays.stream(trials).sum() > 0) {
                pearson = pearson.plus(PearsonSplit.of(plan.sharesIn(epoch), trials));
            }
        }
        return new Split(
                logBayesFactor, sequentialPValue(), pearson.chiSquare(), pearson.degreesOfFreedom(), pearson.pValue());
    }

    void write(DataOutput out) throws IOException {
        out.writeDouble(logBayesFactor);
        out.writeDouble(largest);
    }

    void read(DataInput in) throws IOException {
        logBayesFactor = in.readDouble();
        largest = in.readDouble();
    }
}
