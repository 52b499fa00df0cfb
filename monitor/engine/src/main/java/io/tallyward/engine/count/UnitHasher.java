package io.tallyward.engine.count;

import java.nio.ByteBuffer;
import java.nio.charset.StandardCharsets;
import java.security.InvalidKeyException;
import java.security.NoSuchAlgorithmException;
import javax.crypto.Mac;
import javax.crypto.spec.SecretKeySpec;

/**
 * Replaces unit identifiers by the first 128 bits of their HMAC-SHA256. Two units share a hash with probability below
 * 2e-21 among a billion units (birthday bound). Not thread-safe.
 */
final class UnitHasher {

    private final Mac mac;

    UnitHasher(byte[] key) {
        try {
            mac = Mac.getInstance("HmacSHA256");
            mac.init(new SecretKeySpec(key, "HmacSHA256"));
        } catch (NoSuchAlgorithmException | InvalidKeyException e) {
            throw new IllegalStateException("HmacSHA256 is missing from this Java runtime", e);
        }
    }

    /**
     * Tells keys apart without giving them away: a part of the hash of the empty text, which is no unit. Two keys share it
     * with probability 2^-64.
     */
    long keyFingerprint() {
        return hash("").high();
    }

    UnitHash hash(String unit) {
        ByteBuffer digest = ByteBuffer.wrap(mac.doFinal(unit.getBytes(StandardCharsets.UTF_8)));
        return new UnitHash(digest.getLong(), digest.getLong());
    }
}
