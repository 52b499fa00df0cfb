package io.tallyward.connector.webhook;

import java.security.InvalidKeyException;
import java.security.NoSuchAlgorithmException;
import java.util.Base64;
import javax.crypto.Mac;
import javax.crypto.spec.SecretKeySpec;

/** A symmetric signing key shared with one receiver. It never prints: neither here nor in any message. */
public final class SigningSecret {

    private static final String PREFIX = "whsec_";
    private static final String ALGORITHM = "HmacSHA256";
    private static final int MIN_BYTES = 24;

    private final SecretKeySpec key;

    private SigningSecret(byte[] key) {
        this.key = new SecretKeySpec(key, ALGORITHM);
    }

    /**
     * Reads a secret in the form of Standard Webhooks: {@code whsec_} and the base64 of at least 24 random bytes.
     * White space around it, as files have at their end, is ignored.
     *
     * @throws IllegalArgumentException if it has another form; the message does not repeat it
     */
    public static SigningSecret parse(String text) {
        String trimmed = text.strip();
        if (!trimmed.startsWith(PREFIX)) {
            throw new IllegalArgumentException("webhook secret: no " + PREFIX + " at its start (expected: " + PREFIX
                    + " and base64 of at least " + MIN_BYTES + " bytes)");
        }
        byte[] bytes = decode(trimmed.substring(PREFIX.length()));
        if (bytes.length < MIN_BYTES) {
            throw new IllegalArgumentException(
                    "webhook secret: " + bytes.length + " bytes (expected: at least " + MIN_BYTES + ")");
        }
        return new SigningSecret(bytes);
    }

    private static byte[] decode(String base64) {
        try {
            return Base64.getDecoder().decode(base64);
        } catch (IllegalArgumentException e) {
            // The decoder's message, and so the cause, would show a part of the secret.
            throw new IllegalArgumentException("webhook secret: not base64 after " + PREFIX + " (expected: base64)");
        }
    }

    /** The HMAC-SHA256 (RFC 2104) of a content under this key: 32 bytes. */
    byte[] hmac(byte[]... parts) {
        try {
            Mac mac = Mac.getInstance(ALGORITHM);
            mac.init(key);
            for (byte[] part : parts) {
                mac.update(part);
            }
            return mac.doFinal();
        } catch (NoSuchAlgorithmException | InvalidKeyException e) {
            throw new IllegalStateException(ALGORITHM + " is missing from this Java runtime", e);
        }
    }

    @Override
    public String toString() {
        return PREFIX + "(hidden)";
    }
}
