package io.tallyward.engine.shard;

import java.io.ByteArrayOutputStream;
import java.io.DataOutputStream;
import java.io.IOException;
import java.io.UncheckedIOException;

/** Writes keys and values of state changes field by field. */
public final class Packing {

    private Packing() {}

    /** Something that writes its fields. */
    @FunctionalInterface
    public interface Body {
        /** Writes the fields in the order in which they are read back. */
        void writeTo(DataOutputStream out) throws IOException;
    }

    /** The bytes of what a body writes. */
    public static byte[] pack(Body body) {
        ByteArrayOutputStream bytes = new ByteArrayOutputStream();
        try (DataOutputStream out = new DataOutputStream(bytes)) {
            body.writeTo(out);
        } catch (IOException e) {
            throw new UncheckedIOException("a write to memory failed", e);
        }
        return bytes.toByteArray();
    }
}
