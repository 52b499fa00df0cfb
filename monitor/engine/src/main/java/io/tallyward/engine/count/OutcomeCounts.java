package io.tallyward.engine.count;

import java.io.DataInput;
import java.io.DataOutput;
import java.io.IOException;
import java.util.Arrays;

/** How many events ended in each outcome. An immutable value; {@link Builder} accumulates. */
public final class OutcomeCounts {

    private static final Outcome[] OUTCOMES = Outcome.values();

    /** Nothing yet. */
    public static final OutcomeCounts NONE = new OutcomeCounts(new long[OUTCOMES.length]);

    private final long[] counts;

    private OutcomeCounts(long[] counts) {
        this.counts = counts;
    }

    /** Counts in the order of {@link Outcome#values()}. */
    public static OutcomeCounts of(long... counts) {
        if (counts.length != OUTCOMES.length) {
            throw new IllegalArgumentException(
                    "counts: " + counts.length + " values (expected: " + OUTCOMES.length + ")");
        }
        return new OutcomeCounts(counts.clone());
    }

    public long get(Outcome outcome) {
        return counts[outcome.ordinal()];
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

    /** Writes the counts in the order of {@link Outcome#values()}. */
    public void write(DataOutput out) throws IOException {
        for (long count : counts) {
            out.writeLong(count);
        }
    }

    /** Reads what {@link #write} wrote. */
    public static OutcomeCounts read(DataInput in) throws IOException {
        long[] counts = new long[OUTCOMES.length];
        for (int i = 0; i < counts.length; i++) {
            counts[i] = in.readLong();
        }
        return new OutcomeCounts(counts);
    }

    @Override
    public boolean equals(Object other) {
        return other instanceof OutcomeCounts that && Arrays.equals(counts, that.counts);
    }

    @Override
    public int hashCode() {
        return Arrays.hashCode(counts);
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
        return text.append('}').toString();
    }

    /** Accumulates outcomes; not thread-safe. */
    public static final class Builder {

        private final long[] counts = new long[OUTCOMES.length];

        public Builder add(Outcome outcome, long events) {
            counts[outcome.ordinal()] += events;
            return this;
        }

        public Builder add(OutcomeCounts other) {
            for (int i = 0; i < counts.length; i++) {
                counts[i] += other.counts[i];
            }
            return this;
        }

        public OutcomeCounts build() {
            return new OutcomeCounts(counts.clone());
        }
    }
}
