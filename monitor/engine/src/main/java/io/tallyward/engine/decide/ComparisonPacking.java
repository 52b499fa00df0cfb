package io.tallyward.engine.decide;

import io.tallyward.engine.record.Adjusted;
import io.tallyward.engine.record.Clustering;
import io.tallyward.engine.record.DecisionRecord.Comparison;
import io.tallyward.engine.record.Estimated;
import io.tallyward.engine.record.Outlook;
import io.tallyward.engine.record.Verdict;
import java.io.DataInput;
import java.io.DataOutput;
import java.io.IOException;

/** The durable form of a comparison: its fields in order, each that may be null after a flag. */
final class ComparisonPacking {

    private ComparisonPacking() {}

    static void write(Comparison comparison, DataOutput out) throws IOException {
        out.writeUTF(comparison.variant());
        out.writeInt(comparison.look());
        out.writeDouble(comparison.z());
        out.writeDouble(comparison.information());
        out.writeDouble(comparison.informationFraction());
        out.writeDouble(comparison.spendingTime());
        out.writeDouble(comparison.level());
        out.writeDouble(comparison.alphaSpent());
        write(comparison.upper(), out);
        write(comparison.lower(), out);
        write(comparison.futility(), out);
        out.writeDouble(comparison.difference());
        write(comparison.differenceLower(), out);
        write(comparison.differenceUpper(), out);
        write(comparison.lift(), out);
        write(comparison.outlook(), out);
        write(comparison.adjusted(), out);
        write(comparison.clustering(), out);
        out.writeUTF(comparison.verdict().name());
        out.writeUTF(comparison.held() == null ? "" : comparison.held().name());
        out.writeUTF(comparison.reason());
    }

    static Comparison read(DataInput in) throws IOException {
        return new Comparison(
                in.readUTF(),
                in.readInt(),
                in.readDouble(),
                in.readDouble(),
                in.readDouble(),
                in.readDouble(),
                in.readDouble(),
                in.readDouble(),
                real(in),
                real(in),
                real(in),
                in.readDouble(),
                real(in),
                real(in),
                estimated(in),
                outlook(in),
                adjusted(in),
                clustering(in),
                Verdict.valueOf(in.readUTF()),
                heldVerdict(in),
                in.readUTF());
    }

    private static Verdict heldVerdict(DataInput in) throws IOException {
        String name = in.readUTF();
        return name.isEmpty() ? null : Verdict.valueOf(name);
    }

    private static boolean flag(Object value, DataOutput out) throws IOException {
        out.writeBoolean(value != null);
        return value != null;
    }

    private static void write(Double value, DataOutput out) throws IOException {
        if (flag(value, out)) {
            out.writeDouble(value);
        }
    }

    private static Double real(DataInput in) throws IOException {
        return in.readBoolean() ? (Double) in.readDouble() : null;
    }

    private static void write(Estimated estimated, DataOutput out) throws IOException {
        if (flag(estimated, out)) {
            out.writeDouble(estimated.value());
            write(estimated.lower(), out);
            write(estimated.upper(), out);
        }
    }

    private static Estimated estimated(DataInput in) throws IOException {
        return in.readBoolean() ? new Estimated(in.readDouble(), real(in), real(in)) : null;
    }

    private static void write(Outlook outlook, DataOutput out) throws IOException {
        if (flag(outlook, out)) {
            out.writeDouble(outlook.underTrend());
            out.writeDouble(outlook.underDesign());
            out.writeDouble(outlook.withoutEffect());
            out.writeDouble(outlook.predictive());
        }
    }

    private static Outlook outlook(DataInput in) throws IOException {
        return in.readBoolean()
                ? new Outlook(in.readDouble(), in.readDouble(), in.readDouble(), in.readDouble())
                : null;
    }

    private static void write(Adjusted adjusted, DataOutput out) throws IOException {
        if (flag(adjusted, out)) {
            out.writeDouble(adjusted.pValue());
            out.writeDouble(adjusted.level());
            write(adjusted.drift(), out);
            write(adjusted.difference(), out);
            write(adjusted.lift(), out);
        }
    }

    private static Adjusted adjusted(DataInput in) throws IOException {
        return in.readBoolean()
                ? new Adjusted(in.readDouble(), in.readDouble(), estimated(in), estimated(in), estimated(in))
                : null;
    }

    private static void write(Clustering clustering, DataOutput out) throws IOException {
        if (flag(clustering, out)) {
            out.writeDouble(clustering.independentZ());
            out.writeDouble(clustering.designEffect());
        }
    }

    private static Clustering clustering(DataInput in) throws IOException {
        return in.readBoolean() ? new Clustering(in.readDouble(), in.readDouble()) : null;
    }
}
