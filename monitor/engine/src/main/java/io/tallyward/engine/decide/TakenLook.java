package io.tallyward.engine.decide;

import io.tallyward.engine.record.DecisionRecord.Comparison;
import io.tallyward.statistics.boundary.Look;
import java.io.DataInput;
import java.io.DataOutput;
import java.io.IOException;
import java.time.Instant;

/**
 * A look that was taken, with what the next one needs to know about it.
 *
 * @param windowEnd event time of the look
 * @param benefitOpen whether the minimum run was over
 * @param look its boundaries and the error spent, on the scale of z as variant minus control
 * @param scoreVariance variance of the score that the look was taken with
 * @param betaSpent cumulative type II error spent on futility; 0 when there is none
 * @param futility futility boundary on the scale on which a benefit is positive; negative infinity when there is none
 * @param comparison what was recorded of it
 */
record TakenLook(
        Instant windowEnd,
        boolean benefitOpen,
        Look look,
        double scoreVariance,
        double betaSpent,
        double futility,
        Comparison comparison) {

    void write(DataOutput out) throws IOException {
        out.writeLong(windowEnd.toEpochMilli());
        out.writeBoolean(benefitOpen);
        out.writeInt(look.number());
        out.writeDouble(look.information());
        out.writeDouble(look.upperSpent());
        out.writeDouble(look.lowerSpent());
        out.writeDouble(look.upper());
        out.writeDouble(look.lower());
        out.writeDouble(scoreVariance);
        out.writeDouble(betaSpent);
        out.writeDouble(futility);
        ComparisonPacking.write(comparison, out);
    }

    static TakenLook read(DataInput in) throws IOException {
        return new TakenLook(
                Instant.ofEpochMilli(in.readLong()),
                in.readBoolean(),
                new Look(
                        in.readInt(),
                        in.readDouble(),
                        in.readDouble(),
                        in.readDouble(),
                        in.readDouble(),
                        in.readDouble()),
                in.readDouble(),
                in.readDouble(),
                in.readDouble(),
                ComparisonPacking.read(in));
    }
}
