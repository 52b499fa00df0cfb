package io.tallyward.engine.decide;

import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.record.DecisionRecord.Split;
import io.tallyward.engine.record.SplitOrigin;
import io.tallyward.engine.record.SplitPeak;
import io.tallyward.engine.record.SplitPeak.EpochUnits;
import io.tallyward.statistics.split.PearsonSplit;
import io.tallyward.statistics.split.SequentialEvidence;
import io.tallyward.statistics.split.SequentialSplitTest;
import java.io.DataInput;
import java.io.DataOutput;
import java.io.IOException;
import java.util.ArrayList;
import java.util.Arrays;
import java.util.List;

/**
 * Watches the traffic split after every complete window. Each allocation epoch has its own evidence against its own planned
 * shares; the epochs' data are disjoint, so the product of their e-values is an e-value, and one over its largest value so
 * far is a p-value that may be read at any time (Ville's inequality).
 *
 * <p>Once the verdict on a challenger is told while others go on, whoever follows it stops showing that challenger. From
 * then on it is left out: the evidence so far stands, and what comes is held against the planned shares of the others among
 * themselves. These are disjoint data again, so the product stays an e-value.
 */
final class SplitWatch {

    /**
     * Concentration of the Dirichlet prior under the alternative. It puts the alternative's shares about 0.016 away from an
     * even plan (0.5 / sqrt(concentration + 1)), the size of the splits that broken pipelines produce.
     */
    static final double CONCENTRATION = 1000;

    private final Plan plan;
    private final int epochs;
    private final boolean[] watched;
    private final long[][] before;

    /** Units when the evidence was largest. */
    private final long[][] peak;

    private double earlierEvidence;
    private PearsonSplit earlierPearson = PearsonSplit.NONE;
    private double logBayesFactor;
    private SequentialEvidence evidence = SequentialEvidence.NONE;

    SplitWatch(Plan plan) {
        this.plan = plan;
        epochs = plan.epochCount();
        watched = new boolean[plan.variants().size()];
        Arrays.fill(watched, true);
        before = new long[epochs][watched.length];
        peak = new long[epochs][watched.length];
    }

    /** Reads the split again. */
    void observe(CumulativeCounts counts) {
        double sum = earlierEvidence;
        for (int epoch = 0; epoch < epochs; epoch++) {
            sum += SequentialSplitTest.logBayesFactor(CONCENTRATION, shares(epoch), trials(counts, epoch));
        }
        logBayesFactor = sum;
        SequentialEvidence now = evidence.after(sum);
        if (now.largestLogBayesFactor() > evidence.largestLogBayesFactor()) {
            for (int epoch = 0; epoch < epochs; epoch++) {
                peak[epoch] = counts.unitsIn(epoch);
            }
        }
        evidence = now;
    }

    /** Leaves a variant out from now on. At least two always stay. */
    void leaveOut(int variant, CumulativeCounts counts) {
        if (watchedCount() <= 2 || !watched[variant]) {
            return;
        }
        observe(counts);
        earlierEvidence = logBayesFactor;
        earlierPearson = pearson(counts);
        for (int epoch = 0; epoch < epochs; epoch++) {
            before[epoch] = counts.unitsIn(epoch);
        }
        watched[variant] = false;
    }

    private int watchedCount() {
        int count = 0;
        for (boolean each : watched) {
            count += each ? 1 : 0;
        }
        return count;
    }

    /** Positions of the variants that are watched, ascending. */
    int[] watched() {
        int[] positions = new int[watchedCount()];
        int next = 0;
        for (int variant = 0; variant < watched.length; variant++) {
            if (watched[variant]) {
                positions[next++] = variant;
            }
        }
        return positions;
    }

    /** Planned shares of the variants that are watched, among themselves. */
    double[] shares(int epoch) {
        double[] all = plan.sharesIn(epoch);
        double[] shares = new double[watchedCount()];
        double sum = 0;
        int next = 0;
        for (int variant = 0; variant < all.length; variant++) {
            if (watched[variant]) {
                shares[next++] = all[variant];
                sum += all[variant];
            }
        }
        for (int i = 0; i < shares.length; i++) {
            shares[i] /= sum;
        }
        return shares;
    }

    private long[] trials(CumulativeCounts counts, int epoch) {
        long[] all = counts.unitsIn(epoch);
        long[] trials = new long[watchedCount()];
        int next = 0;
        for (int variant = 0; variant < all.length; variant++) {
            if (watched[variant]) {
                trials[next++] = all[variant] - before[epoch][variant];
            }
        }
        return trials;
    }

    /** The sequential p-value, in (0, 1]; it never rises. */
    double sequentialPValue() {
        return evidence.pValue();
    }

    /** @param origin where a mismatch comes from; null while there is none */
    Split split(CumulativeCounts counts, SplitOrigin origin) {
        PearsonSplit pearson = pearson(counts);
        return new Split(
                logBayesFactor,
                sequentialPValue(),
                pearson.chiSquare(),
                pearson.degreesOfFreedom(),
                pearson.pValue(),
                peak(),
                origin);
    }

    /** The largest evidence so far, as records carry it; null while none spoke against the plan. */
    SplitPeak peak() {
        if (evidence.equals(SequentialEvidence.NONE)) {
            return null;
        }
        List<EpochUnits> units = new ArrayList<>();
        for (int epoch = 0; epoch < epochs; epoch++) {
            if (epoch == 0 || Arrays.stream(peak[epoch]).sum() > 0) {
                for (int variant = 0; variant < watched.length; variant++) {
                    units.add(new EpochUnits(epoch, plan.variants().get(variant).name(), peak[epoch][variant]));
                }
            }
        }
        return new SplitPeak(evidence.largestLogBayesFactor(), units);
    }

    private PearsonSplit pearson(CumulativeCounts counts) {
        PearsonSplit pearson = earlierPearson;
        for (int epoch = 0; epoch < epochs; epoch++) {
            long[] trials = trials(counts, epoch);
            if (Arrays.stream(trials).sum() > 0) {
                pearson = pearson.plus(PearsonSplit.of(shares(epoch), trials));
            }
        }
        return pearson;
    }

    void write(DataOutput out) throws IOException {
        out.writeDouble(logBayesFactor);
        out.writeDouble(evidence.largestLogBayesFactor());
        out.writeDouble(earlierEvidence);
        out.writeDouble(earlierPearson.chiSquare());
        out.writeInt(earlierPearson.degreesOfFreedom());
        out.writeDouble(earlierPearson.pValue());
        for (int variant = 0; variant < watched.length; variant++) {
            out.writeBoolean(watched[variant]);
            for (int epoch = 0; epoch < epochs; epoch++) {
                out.writeLong(before[epoch][variant]);
                out.writeLong(peak[epoch][variant]);
            }
        }
    }

    /** @param storedEpochs how many epochs there were when it was written; an amendment may have added some since */
    void read(DataInput in, int storedEpochs) throws IOException {
        logBayesFactor = in.readDouble();
        evidence = new SequentialEvidence(in.readDouble());
        earlierEvidence = in.readDouble();
        earlierPearson = new PearsonSplit(in.readDouble(), in.readInt(), in.readDouble());
        for (int variant = 0; variant < watched.length; variant++) {
            watched[variant] = in.readBoolean();
            for (int epoch = 0; epoch < storedEpochs; epoch++) {
                before[epoch][variant] = in.readLong();
                peak[epoch][variant] = in.readLong();
            }
        }
    }
}
