package io.tallyward.demo.receiver;

import java.nio.charset.StandardCharsets;
import java.security.GeneralSecurityException;
import java.security.MessageDigest;
import java.security.SecureRandom;
import java.time.Duration;
import java.time.Instant;
import java.util.Base64;
import javax.crypto.Mac;
import javax.crypto.spec.SecretKeySpec;

/**
 * Checks signatures after the Standard Webhooks specification, version 1.0.0: HMAC-SHA256 over id, timestamp and body, with
 * full stops between them; any one of the listed {@code v1} signatures may fit; the timestamp must be recent.
 */
public final class SignatureCheck {

    /** The tolerance that the specification's reference libraries use. */
    static final Duration TOLERANCE = Duration.ofMinutes(5);

    private static final String PREFIX = "whsec_";
    private static final String SYMMETRIC = "v1,";
    private static final int SECRET_BYTES = 32;

    private final byte[] key;

    /** A check with a secret in its text form, {@code whsec_} and base64. */
    public SignatureCheck(String secret) {
        if (!secret.startsWith(PREFIX)) {
            throw new IllegalArgumentException("secret: hidden (expected: " + PREFIX + " and base64)");
        }
        key = Base64.getDecoder().decode(secret.substring(PREFIX.length()));
    }

    /** A new random secret in its text form. */
    public static String newSecret() {
        byte[] bytes = new byte[SECRET_BYTES];
        new SecureRandom().nextBytes(bytes);
        return PREFIX + Base64.getEncoder().encodeToString(bytes);
    }

    /**
     * What is wrong with a message, in words; empty when nothing is.
     *
     * @param headers the three headers of the message; any may be null
     * @param body the raw body
     * @param now the receiver's clock
     */
    public String fault(Headers headers, byte[] body, Instant now) {
        if (headers.id() == null || headers.timestamp() == null || headers.signatures() == null) {
            return "a webhook header is missing";
        }
        if (!headers.timestamp().matches("[0-9]{1,12}")) {
            return "the timestamp is no number";
        }
        Instant sent = Instant.ofEpochSecond(Long.parseLong(headers.timestamp()));
        if (Duration.between(sent, now).abs().compareTo(TOLERANCE) > 0) {
            return "the timestamp is too far from now";
        }
        byte[] expected = signature(headers.id(), headers.timestamp(), body);
        for (String signature : headers.signatures().split(" ")) {
            if (signature.startsWith(SYMMETRIC) && fits(signature.substring(SYMMETRIC.length()), expected)) {
                return "";
            }
        }
        return "no signature fits";
    }

    /**
     * The headers of a message.
     *
     * @param id {@code webhook-id}
     * @param timestamp {@code webhook-timestamp}, seconds since the epoch
     * @param signatures {@code webhook-signature}, separated by blanks
     */
    public record Headers(String id, String timestamp, String signatures) {}

    private byte[] signature(String id, String timestamp, byte[] body) {
        try {
            Mac mac = Mac.getInstance("HmacSHA256");
            mac.init(new SecretKeySpec(key, "HmacSHA256"));
            mac.update((id + "." + timestamp + ".").getBytes(StandardCharsets.UTF_8));
            return mac.doFinal(body);
        } catch (GeneralSecurityException e) {
            throw new IllegalStateException("HmacSHA256 is missing from this Java runtime", e);
        }
    }

    private static boolean fits(String base64, byte[] expected) {
        try {
            return MessageDigest.isEqual(Base64.getDecoder().decode(base64), expected);
        } catch (IllegalArgumentException notBase64) {
            return false;
        }
    }
}
