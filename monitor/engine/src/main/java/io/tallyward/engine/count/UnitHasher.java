package io.tallyward.engine.count;

import java.lang.invoke.MethodHandles;
import java.lang.invoke.VarHandle;
import java.nio.ByteOrder;
import java.nio.charset.StandardCharsets;
import java.security.MessageDigest;
import java.security.NoSuchAlgorithmException;

/**
 * Replaces unit identifiers by a keyed hash of 128 bits: SipHash-2-4 with doubled output (Aumasson and Bernstein, "SipHash: a
 * fast short-input PRF", INDOCRYPT 2012; the doubled output is the authors' own, in their reference code). Without the key
 * nobody can tell which unit a hash stands for, nor make units collide. Two units of a billion share a hash with probability
 * below 2e-21 (birthday bound). Not thread-safe.
 */
final class UnitHasher {

    private static final int KEY_BYTES = 16;
    private static final VarHandle LONGS = MethodHandles.byteArrayViewVarHandle(long[].class, ByteOrder.LITTLE_ENDIAN);

    private final long k0;
    private final long k1;
    private long v0;
    private long v1;
    private long v2;
    private long v3;
    private long high;
    private long low;

    /** @param key secret bytes, any number of them; 16 are taken from their SHA-256 */
    UnitHasher(byte[] key) {
        this(sha256(key), 0);
    }

    private UnitHasher(byte[] bytes, int at) {
        k0 = (long) LONGS.get(bytes, at);
        k1 = (long) LONGS.get(bytes, at + Long.BYTES);
    }

    /** A hasher with exactly this key of 16 bytes, as published test vectors have it. */
    static UnitHasher ofKey(byte[] key) {
        if (key.length != KEY_BYTES) {
            throw new IllegalArgumentException("key: " + key.length + " bytes (expected: " + KEY_BYTES + ")");
        }
        return new UnitHasher(key, 0);
    }

    private static byte[] sha256(byte[] key) {
        try {
            return MessageDigest.getInstance("SHA-256").digest(key);
        } catch (NoSuchAlgorithmException e) {
            throw new IllegalStateException("SHA-256 is missing from this Java runtime", e);
        }
    }

    /**
     * Tells keys apart without giving them away: a part of the hash of the empty text, which is no unit. Two keys share it
     * with probability 2^-64.
     */
    long keyFingerprint() {
        hash("");
        return high;
    }

    void hash(String unit) {
        byte[] bytes = unit.getBytes(StandardCharsets.UTF_8);
        hash(bytes, 0, bytes.length);
    }

    /** Hashes some bytes; {@link #high} and {@link #low} then give the result. */
    void hash(byte[] bytes, int from, int length) {
        v0 = k0 ^ 0x736f6d6570736575L;
        v1 = k1 ^ 0x646f72616e646f6dL ^ 0xee;
        v2 = k0 ^ 0x6c7967656e657261L;
        v3 = k1 ^ 0x7465646279746573L;
        int whole = length & -Long.BYTES;
        for (int i = 0; i < whole; i += Long.BYTES) {
            absorb((long) LONGS.get(bytes, from + i));
        }
        long last = (long) length << 56;
        for (int i = whole; i < length; i++) {
            last |= (bytes[from + i] & 0xffL) << Byte.SIZE * (i - whole);
        }
        absorb(last);
        v2 ^= 0xee;
        rounds(4);
        high = Long.reverseBytes(v0 ^ v1 ^ v2 ^ v3);
        v1 ^= 0xdd;
        rounds(4);
        low = Long.reverseBytes(v0 ^ v1 ^ v2 ^ v3);
    }

    /** The first eight bytes of the last hash. */
    long high() {
        return high;
    }

    /** The other eight. */
    long low() {
        return low;
    }

    private void absorb(long word) {
        v3 ^= word;
        rounds(2);
        v0 ^= word;
    }

    private void rounds(int count) {
        for (int i = 0; i < count; i++) {
            v0 += v1;
            v1 = Long.rotateLeft(v1, 13) ^ v0;
            v0 = Long.rotateLeft(v0, 32);
            v2 += v3;
            v3 = Long.rotateLeft(v3, 16) ^ v2;
            v0 += v3;
            v3 = Long.rotateLeft(v3, 21) ^ v0;
            v2 += v1;
            v1 = Long.rotateLeft(v1, 17) ^ v2;
            v2 = Long.rotateLeft(v2, 32);
        }
    }
}
