package io.tallyward.engine.count;

import java.io.DataOutputStream;
import java.io.IOException;
import java.io.UncheckedIOException;
import java.util.ArrayList;
import java.util.List;

/** Packs the units of a window into chunks that are each small enough for one record. */
final class SealedChunks {

    private final List<byte[]> full = new ArrayList<>();
    private final ChunkBytes bytes = new ChunkBytes();
    private final DataOutputStream out = new DataOutputStream(bytes);

    void add(OpenChunks.Packed unit) {
        try {
            unit.write(out);
        } catch (IOException e) {
            throw new UncheckedIOException("a write to memory failed", e);
        }
        if (bytes.size() >= CountState.PACKED_BYTES) {
            close();
        }
    }

    private void close() {
        full.add(bytes.take());
    }

    /** The chunks; empty when there was no unit. */
    List<byte[]> take() {
        if (bytes.size() > 0) {
            close();
        }
        return List.copyOf(full);
    }
}
