package io.tallyward.engine.count;

import java.io.DataInput;
import java.io.DataOutput;
import java.io.IOException;
import java.util.Arrays;

/**
 * How many events ended in each outcome, and the orphans among them by the variant that they name: whose orphans are many has
 * lost views. An immutable value; {@link Builder} accumulates.
 */
public final class OutcomeCounts {

    private static final Outcome[] OUTCOMES = Outcome.values();

    /** Nothing yet. */
    public static final OutcomeCounts NONE = new OutcomeCounts(new long[OUTCOMES.length], new long[0]);

    private final long[] counts;

    /** By position of the variant; the last one, if any, is not zero. */
    private final long[] orphans;

    private OutcomeCounts(long[] counts, long[] orphans) {
        this.counts = counts;
        int length = orphans.length;
        while (length > 0 && orphans[length - 1] == 0) {
            length--;
        }
        this.orphans = Arrays.copyOf(orphans, length);
    }

    /** Counts in the order of {@link Outcome#values()}, of no variant in particular. */
    public static OutcomeCounts of(long... counts) {
        if (counts.length != OUTCOMES.length) {
            throw new IllegalArgumentException(
                    "counts: " + counts.length + " values (expected: " + OUTCOMES.length + ")");
        }
        return new OutcomeCounts(counts.clone(), new long[0]);
    }

    public long get(Outcome outcome) {
        return counts[outcome.ordinal()];
    }

    /** Orphans that name a variant, by its position in the plan. */
    public long orphans(int variant) {
        return variant < orphans.length ? orphans[variant] : 0;
    }

    /** Orphans by position of the variant that they name, up to the last that has any. */
    public long[] orphansByVariant() {
        return orphans.clone();
    }

    /** The same with other counts, in the order of {@link Outcome#values()}. */
    public OutcomeCounts withCounts(long... other) {
        return new OutcomeCounts(of(other).counts, orphans);
    }

    /** All events counted here. */
    public long total() {
        return Arrays.stream(counts).sum();
    }

    public OutcomeCounts plus(OutcomeCounts other) {
        return new Builder().add(this).add(other).build();
    }

    /** Counts in the order of {@link Outcome#values()}. */
    public long[] toArray() {
        return counts.clone();
    }

    /** Writes the counts in the order of {@link Outcome#values()}, and the orphans by variant. */
    public void write(DataOutput out) throws IOException {
        for (long count : counts) {
            out.writeLong(count);
        }
        out.writeByte(orphans.length);
        for (long count : orphans) {
            out.writeLong(count);
        }
    }

    /** Reads what {@link #write} wrote. */
    public static OutcomeCounts read(DataInput in) throws IOException {
        long[] counts = new long[OUTCOMES.length];
        for (int i = 0; i < counts.length; i++) {
            counts[i] = in.readLong();
        }
        long[] orphans = new long[in.readByte()];
        for (int i = 0; i < orphans.length; i++) {
            orphans[i] = in.readLong();
        }
        return new OutcomeCounts(counts, orphans);
    }

    @Override
    public boolean equals(Object other) {
        return other instanceof OutcomeCounts that
                && Arrays.equals(counts, that.counts)
                && Arrays.equals(orphans, that.orphans);
    }

    @Override
    public int hashCode() {
        return 31 * Arrays.hashCode(counts) + Arrays.hashCode(orphans);
    }

    @Override
    public String toString() {
        StringBuilder text = new StringBuilder("{");
        for (Outcome outcome : OUTCOMES) {
            if (get(outcome) != 0) {
                text.append(text.length() > 1 ? ", " : "")
                        .append(outcome.code())
                        .append(' ')
                        .append(get(outcome));
            }
        }
        if (orphans.length > 0) {
            text.append(", orphans by variant ").append(Arrays.toString(orphans));
        }
        return text.append('}').toString();
    }

    /** Accumulates outcomes; not thread-safe. */
    public static final class Builder {

        private final long[] counts = new long[OUTCOMES.length];
        private long[] orphans = new long[0];

        public Builder add(Outcome outcome, long events) {
            counts[outcome.ordinal()] += events;
            return this;
        }

        /** An event that names a variant. */
        public Builder addOf(int variant, Outcome outcome) {
            if (outcome == Outcome.ORPHAN) {
                addOrphans(variant, 1);
            }
            counts[outcome.ordinal()]++;
            return this;
        }

        /** Says of which variant some of the orphans are that are counted as such. */
        public Builder addOrphans(int variant, long events) {
            if (variant >= orphans.length) {
                orphans = Arrays.copyOf(orphans, variant + 1);
            }
            orphans[variant] += events;
            return this;
        }

        public Builder add(OutcomeCounts other) {
            for (int i = 0; i < counts.length; i++) {
                counts[i] += other.counts[i];
            }
            for (int i = 0; i < other.orphans.length; i++) {
                addOrphans(i, other.orphans[i]);
            }
            return this;
        }

        public OutcomeCounts build() {
            return new OutcomeCounts(counts.clone(), orphans);
        }
    }
}
