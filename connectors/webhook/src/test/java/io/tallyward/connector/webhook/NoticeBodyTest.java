package io.tallyward.connector.webhook;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertFalse;
import static org.junit.jupiter.api.Assertions.assertTrue;

import com.fasterxml.jackson.databind.JsonNode;
import com.fasterxml.jackson.databind.ObjectMapper;
import io.tallyward.engine.record.Notice;
import java.io.IOException;
import java.net.URI;
import java.nio.charset.StandardCharsets;
import java.util.LinkedHashMap;
import java.util.List;
import java.util.Map;
import org.junit.jupiter.api.Test;
import org.junit.jupiter.params.ParameterizedTest;
import org.junit.jupiter.params.provider.ValueSource;

class NoticeBodyTest {

    private static final WebhookTarget PLAIN = Fixtures.target("https://hooks.northwater.example/a");
    private static final WebhookTarget LINKED = WebhookTarget.builder(
                    URI.create("https://hooks.northwater.example/a"), List.of(Fixtures.secret()))
            .runbookBase(URI.create("https://wiki.northwater.example/runbook"))
            .evidenceBase(URI.create("https://monitor.northwater.example/experiments/"))
            .build();

    @Test
    void isACloudEventInStructuredMode() {
        assertEquals(
                "{\"specversion\":\"1.0\",\"id\":\"n_1\",\"source\":\"/tallyward/quay-banner\","
                        + "\"type\":\"io.tallyward.notice.stop\",\"subject\":\"quay-banner/wide\","
                        + "\"time\":\"2026-05-04T06:00:00Z\",\"datacontenttype\":\"application/json\",\"data\":{"
                        + "\"experiment\":\"quay-banner\",\"variant\":\"wide\",\"kind\":\"stop\",\"severity\":\"ticket\","
                        + "\"summary\":\"The variant wide of quay-banner crossed the benefit boundary.\","
                        + "\"facts\":{\"look\":\"7 of at most 112\",\"z\":\"3.41\"},"
                        + "\"action\":\"Stop the experiment and keep wide.\",\"decision\":\"" + "ab".repeat(32) + "\","
                        + "\"runbook\":\"https://wiki.northwater.example/runbook#stop\","
                        + "\"evidence\":\"https://monitor.northwater.example/experiments/quay-banner\"}}",
                new String(NoticeBody.render(Fixtures.stop("n_1"), LINKED), StandardCharsets.UTF_8));
    }

    @Test
    void hasNoLinksThatAreNotConfigured() throws IOException {
        JsonNode data = data(NoticeBody.render(Fixtures.stop("n_1"), PLAIN));
        assertFalse(data.has("runbook") || data.has("evidence"));
    }

    @Test
    void leavesOutAnEmptySubjectAndEncodesOddNames() throws IOException {
        JsonNode event = new ObjectMapper().readTree(NoticeBody.render(notice("", "", Map.of()), LINKED));
        assertFalse(event.has("subject"));
        assertEquals("/tallyward/", event.get("source").textValue());
        event = new ObjectMapper().readTree(NoticeBody.render(notice("a b/\u00fc", "", Map.of()), LINKED));
        assertEquals("/tallyward/a%20b%2F%C3%BC", event.get("source").textValue());
        assertEquals(
                event.get("source").textValue(),
                URI.create(event.get("source").textValue()).toString());
    }

    @ParameterizedTest
    @ValueSource(strings = {"x", "\u0001", "\u00fc", "\ud83d\udea2", "\ud83d", "\"\\"})
    void staysUnderTwentyKilobytesAndIsJsonWhateverTheTexts(String unit) throws IOException {
        String text = unit.repeat(30_000);
        Map<String, String> facts = new LinkedHashMap<>();
        for (int i = 0; i < 100; i++) {
            facts.put(i + text, text);
        }
        byte[] body = NoticeBody.render(notice(text, text, facts), LINKED);
        assertTrue(body.length < 20_000, body.length + " bytes");
        JsonNode data = data(body);
        assertEquals(100, data.get("facts").size() + data.get("factsOmitted").intValue());
        assertEquals(
                "https://wiki.northwater.example/runbook#stop",
                data.get("runbook").textValue());
    }

    private static Notice notice(String experiment, String text, Map<String, String> facts) {
        return new Notice(
                "n_1",
                Notice.Kind.STOP,
                Notice.Severity.INFO,
                experiment,
                text,
                Fixtures.START,
                text,
                facts,
                text,
                text);
    }

    private static JsonNode data(byte[] body) throws IOException {
        return new ObjectMapper().readTree(body).get("data");
    }
}
