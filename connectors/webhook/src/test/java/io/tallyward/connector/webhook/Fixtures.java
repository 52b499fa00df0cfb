package io.tallyward.connector.webhook;

import io.tallyward.engine.record.Notice;
import java.net.URI;
import java.nio.charset.StandardCharsets;
import java.time.Duration;
import java.time.Instant;
import java.time.InstantSource;
import java.util.Base64;
import java.util.LinkedHashMap;
import java.util.List;
import java.util.Map;

/** Notices, secrets and a clock that moves when it is told to. */
final class Fixtures {

    static final Instant START = Instant.parse("2026-05-04T06:00:00Z");
    static final String SECRET = secretText("an invented key of 32 characters");
    static final String NEW_SECRET = secretText("the key that will replace it 32.");

    private Fixtures() {}

    static Notice stop(String id) {
        Map<String, String> facts = new LinkedHashMap<>();
        facts.put("look", "7 of at most 112");
        facts.put("z", "3.41");
        return new Notice(
                id,
                Notice.Kind.STOP,
                Notice.Severity.TICKET,
                "quay-banner",
                "wide",
                START,
                "The variant wide of quay-banner crossed the benefit boundary.",
                facts,
                "Stop the experiment and keep wide.",
                "ab".repeat(32));
    }

    static SigningSecret secret() {
        return SigningSecret.parse(SECRET);
    }

    static WebhookTarget target(String uri) {
        return WebhookTarget.of(URI.create(uri), List.of(secret()));
    }

    private static String secretText(String key) {
        return "whsec_" + Base64.getEncoder().encodeToString(key.getBytes(StandardCharsets.UTF_8));
    }

    /** Time stands still between calls of {@link #advance}. */
    static final class ManualClock implements InstantSource {

        private volatile Instant now;

        ManualClock(Instant start) {
            now = start;
        }

        void advance(Duration step) {
            now = now.plus(step);
        }

        @Override
        public Instant instant() {
            return now;
        }
    }
}
