package io.tallyward.engine.decide;

import io.tallyward.engine.record.DecisionRecord.Comparison;
import io.tallyward.engine.record.Verdict;
import io.tallyward.statistics.boundary.Look;
import java.io.DataInput;
import java.io.DataOutput;
import java.io.IOException;
import java.time.Instant;

/**
 * A look that was taken, with what the next one needs to know about it.
 *
 * @param windowEnd event time of the look
 * @param look its boundaries and the error spent, on the scale of z as variant minus control
 * @param betaSpent cumulative type II error spent on futility; 0 when there is none
 * @param futility futility boundary on the scale on which a benefit is positive; negative infinity when there is none
 * @param comparison what was recorded of it
 */
record TakenLook(Instant windowEnd, Look look, double betaSpent, double futility, Comparison comparison) {

    void write(DataOutput out) throws IOException {
        out.writeLong(windowEnd.toEpochMilli());
        out.writeInt(look.number());
        out.writeDouble(look.information());
        out.writeDouble(look.upperSpent());
        out.writeDouble(look.lowerSpent());
        out.writeDouble(look.upper());
        out.writeDouble(look.lower());
        out.writeDouble(betaSpent);
        out.writeDouble(futility);
        out.writeUTF(comparison.variant());
        out.writeInt(comparison.look());
        out.writeDouble(comparison.z());
        out.writeDouble(comparison.information());
        out.writeDouble(comparison.informationFraction());
        out.writeDouble(comparison.alphaSpent());
        writeOptional(out, comparison.upper());
        writeOptional(out, comparison.lower());
        writeOptional(out, comparison.futility());
        out.writeDouble(comparison.difference());
        writeOptional(out, comparison.differenceLower());
        writeOptional(out, comparison.differenceUpper());
        out.writeUTF(comparison.verdict().name());
        out.writeUTF(comparison.held() == null ? "" : comparison.held().name());
        out.writeUTF(comparison.reason());
    }

    static TakenLook read(DataInput in) throws IOException {
        Instant windowEnd = Instant.ofEpochMilli(in.readLong());
        Look look = new Look(
                in.readInt(), in.readDouble(), in.readDouble(), in.readDouble(), in.readDouble(), in.readDouble());
        double betaSpent = in.readDouble();
        double futility = in.readDouble();
        Comparison comparison = new Comparison(
                in.readUTF(),
                in.readInt(),
                in.readDouble(),
                in.readDouble(),
                in.readDouble(),
                in.readDouble(),
                readOptional(in),
                readOptional(in),
                readOptional(in),
                in.readDouble(),
                readOptional(in),
                readOptional(in),
                Verdict.valueOf(in.readUTF()),
                readVerdict(in),
                in.readUTF());
        return new TakenLook(windowEnd, look, betaSpent, futility, comparison);
    }

    private static Verdict readVerdict(DataInput in) throws IOException {
        String name = in.readUTF();
        return name.isEmpty() ? null : Verdict.valueOf(name);
    }

    private static void writeOptional(DataOutput out, Double value) throws IOException {
        out.writeBoolean(value != null);
        if (value != null) {
            out.writeDouble(value);
        }
    }

    private static Double readOptional(DataInput in) throws IOException {
        return in.readBoolean() ? (Double) in.readDouble() : null;
    }
}
