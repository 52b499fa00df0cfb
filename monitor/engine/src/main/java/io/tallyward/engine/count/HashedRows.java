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

    private final int stride;
    private Leaf[] directory = {new Leaf(0, new byte[0])};
    private int depth;
    private int size;
    private Leaf at;
    private int offset;

    private static final class Leaf {
        private int depth;
        private byte[] bytes;
        private int rows;

        Leaf(int depth, byte[] bytes) {
            this.depth = depth;
            this.bytes = bytes;
        }
    }

    /** @param payload bytes of a row beside its hash */
    HashedRows(int payload) {
        stride = HASH + payload;
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
        return at.bytes;
    }

    /** Where the payload of the row last found begins. */
    int payload() {
        return offset + HASH;
    }

    /** The first half of the hash of the row last found. */
    long high() {
        return (long) LONGS.get(at.bytes, offset);
    }

    /** The second half. */
    long low() {
        return (long) LONGS.get(at.bytes, offset + Long.BYTES);
    }

    /** Looks a row up; returns whether there is one. */
    boolean find(long high, long low) {
        at = leaf(high);
        offset = position(at, high, low) * stride;
        return offset < at.rows * stride && high() == high && low() == low;
    }

    /** The first row, in the order of hashes, whose hash begins with 32 given bits; returns whether there is one. */
    boolean findFirst(int prefix) {
        long least = (long) prefix << 32;
        at = leaf(least);
        offset = position(at, least, 0) * stride;
        return offset < at.rows * stride && (int) (high() >>> 32) == prefix;
    }

    /** Moves on to the next row; returns whether there is one whose hash begins with the same bits. */
    boolean next(int prefix) {
        offset += stride;
        return offset < at.rows * stride && (int) (high() >>> 32) == prefix;
    }

    /** Adds a row that was just looked for and not found. Its payload is all zeros. */
    void insert(long high, long low) {
        if (at.rows == MOST_ROWS && at.depth < DEEPEST) {
            split(high);
            find(high, low);
        }
        if (at.rows * stride == at.bytes.length) {
            at.bytes = Arrays.copyOf(at.bytes, at.bytes.length + SPARE_ROWS * stride);
        }
        byte[] bytes = at.bytes;
        System.arraycopy(bytes, offset, bytes, offset + stride, at.rows * stride - offset);
        LONGS.set(bytes, offset, high);
        LONGS.set(bytes, offset + Long.BYTES, low);
        Arrays.fill(bytes, offset + HASH, offset + stride, (byte) 0);
        at.rows++;
        size++;
    }

    /** Removes the row last found; what is then found is the row after it, if any. */
    void remove() {
        byte[] bytes = at.bytes;
        System.arraycopy(bytes, offset + stride, bytes, offset, at.rows * stride - offset - stride);
        at.rows--;
        size--;
        if (size == 0) {
            directory = new Leaf[] {new Leaf(0, new byte[0])};
            depth = 0;
            at = directory[0];
            offset = 0;
        } else if (bytes.length > (at.rows + 4 * SPARE_ROWS) * stride) {
            at.bytes = Arrays.copyOf(bytes, (at.rows + SPARE_ROWS) * stride);
        }
    }

    /** Whether the place last found holds a row whose hash begins with 32 given bits. */
    boolean holds(int prefix) {
        return offset < at.rows * stride && (int) (high() >>> 32) == prefix;
    }

    /** Visits every row, in the order of hashes. */
    void forEach(Visitor visitor) {
        Leaf before = null;
        for (Leaf leaf : directory) {
            if (leaf != before) {
                for (int row = 0; row < leaf.rows; row++) {
                    visitor.visit(leaf.bytes, row * stride);
                }
            }
            before = leaf;
        }
    }

    private Leaf leaf(long high) {
        return directory[depth == 0 ? 0 : (int) (high >>> (Long.SIZE - depth))];
    }

    /**
     * Number of rows before a hash. Hashes are spread evenly, so the place is guessed and then walked to.
     */
    private int position(Leaf leaf, long high, long low) {
        int rows = leaf.rows;
        long spread = (high << leaf.depth) >>> 32;
        int row = (int) ((spread * rows) >>> 32);
        while (row < rows && precedes(leaf.bytes, row * stride, high, low)) {
            row++;
        }
        while (row > 0 && !precedes(leaf.bytes, (row - 1) * stride, high, low)) {
            row--;
        }
        return row;
    }

    private static boolean precedes(byte[] bytes, int at, long high, long low) {
        int compared = Long.compareUnsigned((long) LONGS.get(bytes, at), high);
        return compared < 0
                || (compared == 0 && Long.compareUnsigned((long) LONGS.get(bytes, at + Long.BYTES), low) < 0);
    }

    private void split(long high) {
        Leaf full = leaf(high);
        if (full.depth == depth) {
            Leaf[] doubled = new Leaf[2 * directory.length];
            for (int i = 0; i < directory.length; i++) {
                doubled[2 * i] = directory[i];
                doubled[2 * i + 1] = directory[i];
            }
            directory = doubled;
            depth++;
        }
        int bit = Long.SIZE - 1 - full.depth;
        int lower = 0;
        while (lower < full.rows && ((long) LONGS.get(full.bytes, lower * stride) >>> bit & 1) == 0) {
            lower++;
        }
        full.depth++;
        Leaf upper = new Leaf(full.depth, trimmed(full.bytes, lower, full.rows));
        upper.rows = full.rows - lower;
        full.bytes = trimmed(full.bytes, 0, lower);
        full.rows = lower;
        int span = 1 << (depth - full.depth);
        int first = (int) (high >>> (Long.SIZE - depth)) & -(2 * span);
        Arrays.fill(directory, first + span, first + 2 * span, upper);
    }

    private byte[] trimmed(byte[] bytes, int from, int to) {
        byte[] part = new byte[(to - from + SPARE_ROWS) * stride];
        System.arraycopy(bytes, from * stride, part, 0, (to - from) * stride);
        return part;
    }
}
