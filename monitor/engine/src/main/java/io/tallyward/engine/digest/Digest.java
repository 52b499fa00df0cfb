package io.tallyward.engine.digest;

import java.nio.ByteBuffer;
import java.nio.charset.StandardCharsets;
import java.security.MessageDigest;
import java.security.NoSuchAlgorithmException;
import java.util.HexFormat;

/**
 * A SHA-256 over typed values in a fixed order. Each value is written with its type and length, so that no two different
 * sequences of values share their bytes; reals are written as the bits of the double. The digest therefore covers what a
 * value means and is indifferent to how it is rendered.
 */
public final class Digest {

    private final MessageDigest sha256;

    /**
     * Starts a digest.
     *
     * @param domain what is digested and in which version of its field order, as in {@code "plan/1"}
     */
    public Digest(String domain) {
        try {
            sha256 = MessageDigest.getInstance("SHA-256");
        } catch (NoSuchAlgorithmException e) {
            throw new IllegalStateException("SHA-256 is missing from this Java runtime", e);
        }
        text(domain);
    }

    public Digest text(String value) {
        byte[] bytes = value.getBytes(StandardCharsets.UTF_8);
        sha256.update(
                ByteBuffer.allocate(5).put((byte) 't').putInt(bytes.length).array());
        sha256.update(bytes);
        return this;
    }

    public Digest number(long value) {
        sha256.update(ByteBuffer.allocate(9).put((byte) 'n').putLong(value).array());
        return this;
    }

    public Digest real(double value) {
        sha256.update(ByteBuffer.allocate(9)
                .put((byte) 'r')
                .putLong(Double.doubleToLongBits(value))
                .array());
        return this;
    }

    /** A value that may be absent; absence differs from every value. */
    public Digest optional(Double value) {
        if (value == null) {
            sha256.update((byte) '-');
            return this;
        }
        return real(value);
    }

    /** Ends the digest: 64 hexadecimal digits. The object must not be used afterwards. */
    public String hex() {
        return HexFormat.of().formatHex(sha256.digest());
    }
}
