package io.tallyward.service.config;

import java.util.Objects;

/** Bytes that nobody may see. Its text names where they came from, never what they are; it has no equality to probe. */
public final class Secret {

    private final String origin;
    private final byte[] bytes;

    /**
     * A secret.
     *
     * @param origin where it came from, as in {@code environment variable TALLYWARD_SECRET}
     * @param bytes the secret itself; not empty
     */
    public Secret(String origin, byte[] bytes) {
        this.origin = Objects.requireNonNull(origin, "origin");
        if (bytes.length == 0) {
            throw new IllegalArgumentException("secret: empty (expected: at least one byte)");
        }
        this.bytes = bytes.clone();
    }

    /** The secret itself, for the one use it is meant for. */
    public byte[] reveal() {
        return bytes.clone();
    }

    /** How many bytes it has. */
    public int length() {
        return bytes.length;
    }

    @Override
    public String toString() {
        return "secret from " + origin;
    }
}
