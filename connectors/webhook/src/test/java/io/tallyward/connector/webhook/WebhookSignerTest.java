package io.tallyward.connector.webhook;

import static org.junit.jupiter.api.Assertions.assertDoesNotThrow;
import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertFalse;
import static org.junit.jupiter.api.Assertions.assertThrows;

import com.standardwebhooks.Webhook;
import com.standardwebhooks.exceptions.WebhookSigningException;
import com.standardwebhooks.exceptions.WebhookVerificationException;
import java.nio.charset.StandardCharsets;
import java.time.Instant;
import java.util.Base64;
import java.util.List;
import java.util.Map;
import java.util.Random;
import org.junit.jupiter.api.Test;
import org.junit.jupiter.params.ParameterizedTest;
import org.junit.jupiter.params.provider.ValueSource;

class WebhookSignerTest {

    /** The vector in the tests of the Standard Webhooks reference libraries. */
    @Test
    void signsThePublishedVector() {
        WebhookSigner signer =
                new WebhookSigner(List.of(SigningSecret.parse("whsec_MfKQ9r8GKYqrTwjUPD8ILPZIo2LaLaSw")));
        assertEquals(
                "v1,g0hM9SsE+OTPJTGt/tmIKtSyZlE3uFJELVlNIOLJ1OE=",
                signer.signature("msg_p5jXN8AQM9LWM0D4loKWxJek", 1614265330, bytes("{\"test\": 2432232314}")));
    }

    /** The reference library as the independent signer. */
    @Test
    void agreesWithTheReferenceLibraryOnRandomMessages() throws WebhookSigningException {
        Random random = new Random(20260504);
        for (int i = 0; i < 500; i++) {
            byte[] key = new byte[24 + random.nextInt(60)];
            random.nextBytes(key);
            String secret = "whsec_" + Base64.getEncoder().encodeToString(key);
            String body = "{\"n\":\"\u26f4 " + random.nextLong() + "\"}";
            long seconds = random.nextInt(Integer.MAX_VALUE);
            assertEquals(
                    new Webhook(secret).sign("n_" + i, seconds, body),
                    new WebhookSigner(List.of(SigningSecret.parse(secret))).signature("n_" + i, seconds, bytes(body)),
                    "message " + i);
        }
    }

    @Test
    void signsWithEverySecretSoThatReceiversMayChangeOver() {
        WebhookSigner both = new WebhookSigner(
                List.of(SigningSecret.parse(Fixtures.NEW_SECRET), SigningSecret.parse(Fixtures.SECRET)));
        long now = Instant.now().getEpochSecond();
        Map<String, List<String>> headers = Map.of(
                "webhook-id", List.of("n_1"),
                "webhook-timestamp", List.of(Long.toString(now)),
                "webhook-signature", List.of(both.signature("n_1", now, bytes("{}"))));
        for (String secret : List.of(Fixtures.SECRET, Fixtures.NEW_SECRET)) {
            assertDoesNotThrow(() -> new Webhook(secret).verify("{}", headers));
            assertThrows(WebhookVerificationException.class, () -> new Webhook(secret).verify("{ }", headers));
        }
    }

    @ParameterizedTest
    @ValueSource(strings = {"", "n.1", "n 1", "n\n1", "\u00fc"})
    void refusesIdsThatWouldMakeTheContentAmbiguous(String id) {
        WebhookSigner signer = new WebhookSigner(List.of(Fixtures.secret()));
        assertThrows(IllegalArgumentException.class, () -> signer.signature(id, 0, bytes("{}")));
    }

    @ParameterizedTest
    @ValueSource(
            strings = {
                "",
                "whsec_",
                "MfKQ9r8GKYqrTwjUPD8ILPZIo2LaLaSw",
                "whsec_c2VjcmV0",
                "whsec_s3cr3t!MfKQ9r8GKYqrTwjUPD8ILPZ"
            })
    void refusesWeakOrMalformedSecretsWithoutRepeatingThem(String text) {
        IllegalArgumentException refusal =
                assertThrows(IllegalArgumentException.class, () -> SigningSecret.parse(text));
        assertFalse(
                refusal.getMessage().contains("s3cr3t") || refusal.getMessage().contains("c2VjcmV0"));
        assertFalse(refusal.getMessage().contains("MfKQ"));
        assertEquals(null, refusal.getCause());
    }

    @Test
    void neverPrintsASecret() {
        assertEquals(
                "whsec_(hidden)",
                SigningSecret.parse(" " + Fixtures.SECRET + "\n").toString());
        assertFalse(Fixtures.target("https://hooks.northwater.example/t0ken?k=t0ken")
                .toString()
                .contains("t0ken"));
    }

    private static byte[] bytes(String text) {
        return text.getBytes(StandardCharsets.UTF_8);
    }
}
