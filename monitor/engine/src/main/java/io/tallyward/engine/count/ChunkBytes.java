package io.tallyward.engine.count;

import java.io.OutputStream;
import java.util.Arrays;

/** Bytes written to memory by one thread: every write to a {@code ByteArrayOutputStream} takes a lock. Not thread-safe. */
final class ChunkBytes extends OutputStream {

    private byte[] bytes = new byte[256];
    private int size;

    int size() {
        return size;
    }

    @Override
    public void write(int b) {
        room(1);
        bytes[size++] = (byte) b;
    }

    @Override
    public void write(byte[] source, int from, int length) {
        room(length);
        System.arraycopy(source, from, bytes, size, length);
        size += length;
    }

    private void room(int more) {
        if (size + more > bytes.length) {
            bytes = Arrays.copyOf(bytes, Math.max(size + more, 2 * bytes.length));
        }
    }

    /** Hands over what was written; what is written next comes into an empty place. */
    byte[] take() {
        byte[] taken = Arrays.copyOf(bytes, size);
        size = 0;
        return taken;
    }
}
