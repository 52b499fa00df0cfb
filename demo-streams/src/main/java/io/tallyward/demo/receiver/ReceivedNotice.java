package io.tallyward.demo.receiver;

import com.fasterxml.jackson.databind.JsonNode;
import com.fasterxml.jackson.databind.ObjectMapper;
import io.tallyward.demo.story.Expectation.ExpectedNotice;
import java.io.IOException;

/**
 * A notice as it arrived.
 *
 * @param id its webhook id
 * @param kind published code of the kind, as in {@code stop}
 * @param severity published code of the severity
 * @param experiment the experiment it is about
 * @param variant the variant it is about; empty for all
 * @param at event time of the decision, as text
 * @param summary what happened
 * @param action what to do
 */
public record ReceivedNotice(
        String id,
        String kind,
        String severity,
        String experiment,
        String variant,
        String at,
        String summary,
        String action) {

    private static final ObjectMapper JSON = new ObjectMapper();

    /** Reads a CloudEvents 1.0 event in structured mode. */
    static ReceivedNotice read(String id, byte[] body) throws IOException {
        JsonNode event = JSON.readTree(body);
        if (!event.path("specversion").asText().equals("1.0")
                || !event.path("data").isObject()) {
            throw new IOException("the body is no CloudEvents 1.0 event with data");
        }
        JsonNode data = event.path("data");
        return new ReceivedNotice(
                id,
                data.path("kind").asText(),
                data.path("severity").asText(),
                data.path("experiment").asText(),
                data.path("variant").asText(),
                event.path("time").asText(),
                data.path("summary").asText(),
                data.path("action").asText());
    }

    /** Whether this is the notice that a story expects. */
    public boolean fits(ExpectedNotice expected) {
        return kind.equals(expected.kind()) && variant.equals(expected.variant());
    }

    /** One line for people. */
    public String line() {
        return String.format("  webhook  %s  %-6s  %-11s %s", at, severity, kind, summary);
    }
}
