package io.tallyward.engine.count;

import java.io.DataOutput;
import java.io.DataOutputStream;
import java.io.IOException;
import java.io.UncheckedIOException;
import java.util.ArrayList;
import java.util.List;
import java.util.TreeMap;
import java.util.function.BiConsumer;

/** Packs changed open units by the window in which they fall due, into chunks small enough for one record each. */
final class OpenChunks {

    private final TreeMap<Long, Window> windows = new TreeMap<>();

    private static final class Window {
        private final List<byte[]> full = new ArrayList<>();
        private final ChunkBytes bytes = new ChunkBytes();
        private final DataOutputStream out = new DataOutputStream(bytes);

        private void close() {
            full.add(bytes.take());
        }
    }

    /** Writes what there is to be packed. */
    @FunctionalInterface
    interface Packed {
        void write(DataOutput out) throws IOException;
    }

    /** @param windowStart the window with which the last of what is open about the unit is sealed */
    void add(long windowStart, long high, long low, Packed unit) {
        Window window = windows.computeIfAbsent(windowStart, start -> new Window());
        try {
            window.out.writeLong(high);
            window.out.writeLong(low);
            unit.write(window.out);
        } catch (IOException e) {
            throw new UncheckedIOException("a write to memory failed", e);
        }
        if (window.bytes.size() >= CountState.PACKED_BYTES) {
            window.close();
        }
    }

    /** Hands the chunks over, by window and then in order. */
    void take(BiConsumer<Long, byte[]> taker) {
        windows.forEach((start, window) -> {
            if (window.bytes.size() > 0) {
                window.close();
            }
            window.full.forEach(packed -> taker.accept(start, packed));
        });
        windows.clear();
    }
}
