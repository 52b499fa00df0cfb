package io.tallyward.engine.decide;

import java.io.DataInput;
import java.io.DataOutput;
import java.io.IOException;
import java.util.ArrayList;
import java.util.Arrays;
import java.util.List;

/**
 * Units by variant over the time of one allocation epoch, in stretches of equal length. There are never more than a bound:
 * once it is reached, every two neighbours become one, so that a stretch is a window at first and a power of two of them in a
 * long run.
 */
final class SplitHistory {

    private final long start;
    private final long windowMillis;
    private final int variants;
    private final int most;
    private int windowsEach = 1;
    private int size;
    private long[] units = new long[0];

    /**
     * @param start when the epoch begins, milliseconds since the epoch
     * @param most number of stretches at most, even
     */
    SplitHistory(long start, long windowMillis, int variants, int most) {
        this.start = start;
        this.windowMillis = windowMillis;
        this.variants = variants;
        this.most = most;
    }

    /** Adds units of a window. Windows come in order. */
    void add(long windowStart, int variant, long count) {
        long window = (windowStart - start) / windowMillis;
        while (window / windowsEach >= most) {
            halve();
        }
        int stretch = (int) (window / windowsEach);
        if (stretch >= size) {
            size = stretch + 1;
            if (size * variants > units.length) {
                units = Arrays.copyOf(units, Math.min(most, size + size / 2 + 1) * variants);
            }
        }
        units[stretch * variants + variant] += count;
    }

    private void halve() {
        long[] merged = new long[units.length];
        for (int i = 0; i < size * variants; i++) {
            merged[i / variants / 2 * variants + i % variants] += units[i];
        }
        units = merged;
        size = (size + 1) / 2;
        windowsEach *= 2;
    }

    /** Units of some variants by stretch, oldest first. */
    List<long[]> stretches(int[] ofVariants) {
        List<long[]> stretches = new ArrayList<>();
        for (int stretch = 0; stretch < size; stretch++) {
            long[] counts = new long[ofVariants.length];
            for (int i = 0; i < counts.length; i++) {
                counts[i] = units[stretch * variants + ofVariants[i]];
            }
            stretches.add(counts);
        }
        return stretches;
    }

    /** When a stretch begins, milliseconds since the epoch. */
    long startOf(int stretch) {
        return start + stretch * windowsEach * windowMillis;
    }

    void write(DataOutput out) throws IOException {
        out.writeInt(windowsEach);
        out.writeInt(size);
        for (int i = 0; i < size * variants; i++) {
            writeCount(out, units[i]);
        }
    }

    void read(DataInput in) throws IOException {
        windowsEach = in.readInt();
        size = in.readInt();
        units = new long[size * variants];
        for (int i = 0; i < units.length; i++) {
            units[i] = readCount(in);
        }
    }

    /** Seven bits a byte, the last one marked: nearly all counts of a stretch take two. */
    static void writeCount(DataOutput out, long count) throws IOException {
        long rest = count;
        while (rest > 0x7f) {
            out.writeByte((int) rest & 0x7f);
            rest >>>= 7;
        }
        out.writeByte((int) rest | 0x80);
    }

    static long readCount(DataInput in) throws IOException {
        long count = 0;
        for (int shift = 0; ; shift += 7) {
            int part = in.readByte();
            count |= (long) (part & 0x7f) << shift;
            if (part < 0) {
                return count;
            }
        }
    }
}
