package io.tallyward.engine.count;

import java.lang.invoke.MethodHandles;
import java.lang.invoke.VarHandle;
import java.nio.ByteOrder;
import java.util.Arrays;

/**
 * Rows of a fixed number of bytes, each found by the 128-bit hash it begins with: extendible hashing (Fagin, Nievergelt,
 * Pippenger and Strong 1979) over small leaves of rows in the order of their hashes.
 *
 * <p>Made for millions of rows in little memory. A leaf is one array with at most {@value #SPARE_ROWS} rows to spare, so that
 * a row costs its own bytes and a few per cent; a doubling hash table would cost half as much again on average. Growing
 * splits one leaf at a time and never stops to copy everything. Hashes are keyed, so nobody can make them crowd.
 *
 * <p>A row is addressed by the leaf and the offset that the last {@link #find} or {@link #insert} left behind, and only until
 * the next change. Not thread-safe.
 */
final class HashedRows {

    /** Bytes of the hash. */
    static final int HASH = 16;

    private static final int MOST_ROWS = 256;
    private static final int SPARE_ROWS = 8;
    private static final int DEEPEST = 26;

    private static final VarHandle LONGS = MethodHandles.byteArrayViewVarHandle(long[].class, ByteOrder.BIG_ENDIAN);

    /** Rows to a place of the directory below which it is not doubled, so that crowding hashes cannot make it grow. */
    private static final int LEAST_ROWS_PER_PLACE = 32;

    private final int stride;

    /** What is known of a leaf stands in the directory itself: the first thing read from the leaf is the row. */
    private byte[][] leaves;

    private int[] counts;
    private byte[] depths;
    private int depth;
    private int size;

    private int place;
    private byte[] at;
    private int offset;

    /** @param payload bytes of a row beside its hash */
    HashedRows(int payload) {
        stride = HASH + payload;
        reset();
    }

    private void reset() {
        leaves = new byte[][] {new byte[0]};
        counts = new int[1];
        depths = new byte[1];
        depth = 0;
        size = 0;
        go(0);
    }

    private void go(int toPlace) {
        place = toPlace;
        at = leaves[toPlace];
        offset = 0;
    }

    /** Visits a row. */
    @FunctionalInterface
    interface Visitor {
        /** @param offset where the row begins */
        void visit(byte[] bytes, int offset);
    }

    int size() {
        return size;
    }

    /** Bytes of the leaf that holds the row last found; what lies at {@link #payload()} may be changed. */
    byte[] bytes() {
        return at;
    }

    /** Where the payload of the row last found begins. */
    int payload() {
        return offset + HASH;
    }

    /** The first half of the hash of the row last found. */
    long high() {
        return (long) LONGS.get(at, offset);
    }

    /** The second half. */
    long low() {
        return (long) LONGS.get(at, offset + Long.BYTES);
    }

    /** Looks a row up; returns whether there is one. */
    boolean find(long high, long low) {
        go(placeOf(high));
        offset = position(high, low) * stride;
        return isRow() && high() == high && low() == low;
    }

    /** The first row, in the order of hashes, whose hash begins with 32 given bits; returns whether there is one. */
    boolean findFirst(int prefix) {
        long least = (long) prefix << 32;
        go(placeOf(least));
        offset = position(least, 0) * stride;
        return holds(prefix);
    }

    /** Moves on to the next row; returns whether there is one whose hash begins with the same bits. */
    boolean next(int prefix) {
        offset += stride;
        return holds(prefix);
    }

    /** Whether the place last found holds a row whose hash begins with 32 given bits. */
    boolean holds(int prefix) {
        return isRow() && (int) (high() >>> 32) == prefix;
    }

    private boolean isRow() {
        return offset < counts[place] * stride;
    }

    /** Adds a row that was just looked for and not found. Its payload is all zeros. */
    void insert(long high, long low) {
        while (counts[place] >= MOST_ROWS && canSplit()) {
            split();
            find(high, low);
        }
        int used = counts[place] * stride;
        if (used == at.length) {
            at = Arrays.copyOf(at, used + SPARE_ROWS * stride);
        }
        System.arraycopy(at, offset, at, offset + stride, used - offset);
        LONGS.set(at, offset, high);
        LONGS.set(at, offset + Long.BYTES, low);
        Arrays.fill(at, offset + HASH, offset + stride, (byte) 0);
        keep(counts[place] + 1);
        size++;
    }

    /** Removes the row last found; what is then found is the row after it, if any. */
    void remove() {
        int rest = counts[place] - 1;
        System.arraycopy(at, offset + stride, at, offset, rest * stride - offset);
        size--;
        if (size == 0) {
            reset();
            return;
        }
        if (at.length > (rest + 4 * SPARE_ROWS) * stride) {
            at = Arrays.copyOf(at, (rest + SPARE_ROWS) * stride);
        }
        keep(rest);
    }

    /** Enters the current leaf, with a number of rows, at each of its places. */
    private void keep(int rows) {
        int span = 1 << (depth - depths[place]);
        int first = place & -span;
        for (int i = first; i < first + span; i++) {
            leaves[i] = at;
            counts[i] = rows;
        }
    }

    /** Visits every row, in the order of hashes. */
    void forEach(Visitor visitor) {
        for (int i = 0; i < leaves.length; i += 1 << (depth - depths[i])) {
            for (int row = 0; row < counts[i]; row++) {
                visitor.visit(leaves[i], row * stride);
            }
        }
    }

    private int placeOf(long high) {
        return depth == 0 ? 0 : (int) (high >>> (Long.SIZE - depth));
    }

    /**
     * Number of rows of the current leaf before a hash. Hashes are spread evenly, so the place is guessed and then walked to.
     */
    private int position(long high, long low) {
        byte[] bytes = at;
        int rows = counts[place];
        long spread = (high << depths[place]) >>> 32;
        int row = (int) ((spread * rows) >>> 32);
        while (row < rows && precedes(bytes, row * stride, high, low)) {
            row++;
        }
        while (row > 0 && !precedes(bytes, (row - 1) * stride, high, low)) {
            row--;
        }
        return row;
    }

    private static boolean precedes(byte[] bytes, int at, long high, long low) {
        int compared = Long.compareUnsigned((long) LONGS.get(bytes, at), high);
        return compared < 0
                || (compared == 0 && Long.compareUnsigned((long) LONGS.get(bytes, at + Long.BYTES), low) < 0);
    }

    private boolean canSplit() {
        return depths[place] < depth || (depth < DEEPEST && (long) leaves.length * LEAST_ROWS_PER_PLACE <= size);
    }

    /** Makes two leaves of the current one. */
    private void split() {
        if (depths[place] == depth) {
            doubleDirectory();
        }
        int span = 1 << (depth - depths[place] - 1);
        int first = place & -(2 * span);
        int bit = Long.SIZE - 1 - depths[place];
        byte[] full = at;
        int rows = counts[place];
        int lower = 0;
        while (lower < rows && ((long) LONGS.get(full, lower * stride) >>> bit & 1) == 0) {
            lower++;
        }
        byte deeper = (byte) (depths[place] + 1);
        Arrays.fill(depths, first, first + 2 * span, deeper);
        Arrays.fill(leaves, first, first + span, trimmed(full, 0, lower));
        Arrays.fill(counts, first, first + span, lower);
        Arrays.fill(leaves, first + span, first + 2 * span, trimmed(full, lower, rows));
        Arrays.fill(counts, first + span, first + 2 * span, rows - lower);
    }

    private void doubleDirectory() {
        byte[][] leavesBefore = leaves;
        int[] countsBefore = counts;
        byte[] depthsBefore = depths;
        leaves = new byte[2 * leavesBefore.length][];
        counts = new int[leaves.length];
        depths = new byte[leaves.length];
        for (int i = 0; i < leaves.length; i++) {
            leaves[i] = leavesBefore[i / 2];
            counts[i] = countsBefore[i / 2];
            depths[i] = depthsBefore[i / 2];
        }
        depth++;
        place *= 2;
    }

    private byte[] trimmed(byte[] bytes, int from, int to) {
        byte[] part = new byte[(to - from + SPARE_ROWS) * stride];
        System.arraycopy(bytes, from * stride, part, 0, (to - from) * stride);
        return part;
    }
}
