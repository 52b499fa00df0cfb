package io.tallyward.connector.webhook;

import java.nio.charset.StandardCharsets;
import java.util.Base64;
import java.util.List;
import java.util.stream.Collectors;

/**
 * Signs messages as Standard Webhooks asks (specification, "Symmetric signatures"): HMAC-SHA256 over
 * {@code {id}.{timestamp}.{body}}, base64, prefixed {@code v1,}. Several secrets give several signatures separated by
 * spaces, so that a receiver may change over while both are in use. Immutable and thread-safe.
 */
public final class WebhookSigner {

    /** Header with the identity of the message, the same at every attempt. */
    public static final String ID_HEADER = "webhook-id";

    /** Header with the time of the attempt, whole seconds since the epoch. */
    public static final String TIMESTAMP_HEADER = "webhook-timestamp";

    /** Header with the signatures. */
    public static final String SIGNATURE_HEADER = "webhook-signature";

    private final List<SigningSecret> secrets;

    /** A signer with at least one secret, the newest first by custom. */
    public WebhookSigner(List<SigningSecret> secrets) {
        if (secrets.isEmpty()) {
            throw new IllegalArgumentException("webhook secrets: none (expected: at least one)");
        }
        this.secrets = List.copyOf(secrets);
    }

    /**
     * The value of {@value #SIGNATURE_HEADER}.
     *
     * @param id value of {@value #ID_HEADER}: letters, digits, underscores and hyphens; a full stop would make the signed
     *     content ambiguous
     * @param timestampSeconds value of {@value #TIMESTAMP_HEADER}
     * @param body the bytes of the body as sent
     */
    public String signature(String id, long timestampSeconds, byte[] body) {
        if (!id.matches("[A-Za-z0-9_-]{1,256}")) {
            throw new IllegalArgumentException("webhook id: " + id + " (expected: 1 to 256 letters, digits, _ and -)");
        }
        byte[] head = (id + "." + timestampSeconds + ".").getBytes(StandardCharsets.UTF_8);
        return secrets.stream()
                .map(secret -> "v1," + Base64.getEncoder().encodeToString(secret.hmac(head, body)))
                .collect(Collectors.joining(" "));
    }
}
