package io.tallyward.connector.webhook;

import static org.junit.jupiter.api.Assertions.assertDoesNotThrow;
import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertThrows;

import java.net.URI;
import java.time.Duration;
import java.util.List;
import org.junit.jupiter.api.Test;
import org.junit.jupiter.params.ParameterizedTest;
import org.junit.jupiter.params.provider.CsvSource;

class WebhookTargetTest {

    @ParameterizedTest
    @CsvSource(
            delimiter = '|',
            value = {
                "http://hooks.northwater.example/a     | scheme http (expected: https; http only with allow-http: true)",
                "ftp://hooks.northwater.example/a      | scheme ftp (expected: https; http only with allow-http: true)",
                "/a                                    | scheme null (expected: https; http only with allow-http: true)",
                "https:/a                              | no host in it (expected: https://host/path)",
                "https:a                               | no host in it (expected: https://host/path)",
                "https://under_score.example/a         | no host in it (expected: https://host/path)",
                "https://u:p@hooks.northwater.example/ | user-info before the host (expected: none)",
                "https://u@hooks.northwater.example/   | user-info before the host (expected: none)",
                "https://hooks.northwater.example/#a   | a fragment at its end (expected: none)"
            })
    void refusesOtherUrls(String uri, String message) {
        IllegalArgumentException refusal = assertThrows(IllegalArgumentException.class, () -> Fixtures.target(uri));
        assertEquals("webhook url: " + message, refusal.getMessage());
    }

    @Test
    void takesHttpOnlyWhereAllowed() {
        WebhookTarget.Builder builder =
                WebhookTarget.builder(URI.create("http://127.0.0.1:8099/a"), List.of(Fixtures.secret()));
        assertThrows(IllegalArgumentException.class, builder::build);
        assertEquals("http://127.0.0.1:8099", builder.allowHttp(true).build().origin());
        assertDoesNotThrow(() -> Fixtures.target("HTTPS://hooks.northwater.example:8443/a?b=c"));
    }

    @Test
    void refusesNoSecretsAndNoTime() {
        URI uri = URI.create("https://hooks.northwater.example/a");
        assertThrows(IllegalArgumentException.class, () -> WebhookTarget.of(uri, List.of()));
        WebhookTarget.Builder builder =
                WebhookTarget.builder(uri, List.of(Fixtures.secret())).timeouts(Duration.ZERO, Duration.ofSeconds(15));
        assertThrows(IllegalArgumentException.class, builder::build);
    }
}
