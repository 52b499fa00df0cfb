package io.tallyward.engine.count;

import java.lang.invoke.MethodHandles;
import java.lang.invoke.VarHandle;
import java.nio.ByteOrder;

/**
 * Reads what a {@code DataOutput} has packed, numbers as a whole: a stream would hand out every byte by several calls, and
 * millions of units are read back while nothing is compiled yet. Not thread-safe.
 */
final class ChunkReader {

    private static final VarHandle LONGS = MethodHandles.byteArrayViewVarHandle(long[].class, ByteOrder.BIG_ENDIAN);
    private static final VarHandle INTS = MethodHandles.byteArrayViewVarHandle(int[].class, ByteOrder.BIG_ENDIAN);

    private final byte[] bytes;
    private int next;

    ChunkReader(byte[] bytes) {
        this.bytes = bytes;
    }

    boolean hasMore() {
        return next < bytes.length;
    }

    long readLong() {
        return (long) LONGS.get(bytes, take(Long.BYTES));
    }

    int readInt() {
        return (int) INTS.get(bytes, take(Integer.BYTES));
    }

    byte readByte() {
        return bytes[take(1)];
    }

    private int take(int length) {
        int at = next;
        if (!(length <= bytes.length - at)) {
            throw new IllegalStateException("stored counts: an entry is cut short");
        }
        next = at + length;
        return at;
    }
}
