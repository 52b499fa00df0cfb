package io.tallyward.connector.webhook;

import com.fasterxml.jackson.core.JsonFactory;
import com.fasterxml.jackson.core.JsonGenerator;
import com.fasterxml.jackson.core.json.JsonWriteFeature;
import io.tallyward.engine.record.Notice;
import java.io.ByteArrayOutputStream;
import java.io.IOException;
import java.io.UncheckedIOException;
import java.net.URI;
import java.net.URLEncoder;
import java.nio.charset.StandardCharsets;
import java.util.Map;
import java.util.Optional;

/**
 * A notice as its receiver sees it: a CloudEvents 1.0 event in the structured mode of the JSON format. The same notice
 * always gives the same bytes. Standard Webhooks wants bodies under 20 kB, so long texts are cut and facts that do not fit
 * are left out, the last ones first, with their number in {@code factsOmitted}.
 */
public final class NoticeBody {

    /** Media type of the body. */
    public static final String CONTENT_TYPE = "application/cloudevents+json";

    /** Every body is smaller than this. */
    static final int LIMIT_BYTES = 20_000;

    private static final int MAX_TEXT = 600;
    private static final int MAX_NAME = 128;
    private static final int MAX_FACTS = 40;

    // ASCII only: no receiver can get the encoding wrong.
    private static final JsonFactory FACTORY =
            JsonFactory.builder().enable(JsonWriteFeature.ESCAPE_NON_ASCII).build();

    private final Notice notice;
    private final WebhookTarget target;

    private NoticeBody(Notice notice, WebhookTarget target) {
        this.notice = notice;
        this.target = target;
    }

    /** The body of a notice with the links of a target: UTF-8, under 20 kB. */
    public static byte[] render(Notice notice, WebhookTarget target) {
        NoticeBody body = new NoticeBody(notice, target);
        for (int facts = Math.min(MAX_FACTS, notice.facts().size()); facts > 0; facts--) {
            byte[] bytes = body.bytes(facts);
            if (bytes.length < LIMIT_BYTES) {
                return bytes;
            }
        }
        return body.bytes(0);
    }

    private byte[] bytes(int facts) {
        ByteArrayOutputStream bytes = new ByteArrayOutputStream(2048);
        try (JsonGenerator json = FACTORY.createGenerator(bytes)) {
            json.writeStartObject();
            writeEnvelope(json);
            json.writeObjectFieldStart("data");
            writeData(json, facts);
            json.writeEndObject();
            json.writeEndObject();
        } catch (IOException e) {
            throw new UncheckedIOException("writing to memory failed", e);
        }
        return bytes.toByteArray();
    }

    private void writeEnvelope(JsonGenerator json) throws IOException {
        json.writeStringField("specversion", "1.0");
        json.writeStringField("id", notice.id());
        json.writeStringField("source", "/tallyward/" + encoded(cut(notice.experiment(), MAX_NAME)));
        json.writeStringField("type", "io.tallyward.notice." + notice.kind().code());
        String subject =
                notice.variant().isEmpty() ? notice.experiment() : notice.experiment() + "/" + notice.variant();
        if (!subject.isEmpty()) {
            json.writeStringField("subject", cut(subject, 2 * MAX_NAME));
        }
        json.writeStringField("time", notice.at().toString());
        json.writeStringField("datacontenttype", "application/json");
    }

    private void writeData(JsonGenerator json, int facts) throws IOException {
        json.writeStringField("experiment", cut(notice.experiment(), MAX_NAME));
        json.writeStringField("variant", cut(notice.variant(), MAX_NAME));
        json.writeStringField("kind", notice.kind().code());
        json.writeStringField("severity", notice.severity().code());
        json.writeStringField("summary", cut(notice.summary(), MAX_TEXT));
        writeFacts(json, facts);
        json.writeStringField("action", cut(notice.action(), MAX_TEXT));
        json.writeStringField("decision", cut(notice.decision(), MAX_NAME));
        writeLink(json, "runbook", target.runbookBase(), "#" + notice.kind().code());
        writeLink(json, "evidence", target.evidenceBase(), encoded(cut(notice.experiment(), MAX_NAME)));
    }

    private void writeFacts(JsonGenerator json, int facts) throws IOException {
        json.writeObjectFieldStart("facts");
        int written = 0;
        for (Map.Entry<String, String> fact : notice.facts().entrySet()) {
            if (written++ == facts) {
                break;
            }
            json.writeStringField(cut(fact.getKey(), MAX_NAME), cut(fact.getValue(), MAX_TEXT));
        }
        json.writeEndObject();
        if (facts < notice.facts().size()) {
            json.writeNumberField("factsOmitted", notice.facts().size() - facts);
        }
    }

    private static void writeLink(JsonGenerator json, String name, Optional<URI> base, String rest) throws IOException {
        if (base.isPresent()) {
            json.writeStringField(name, base.get() + rest);
        }
    }

    /** Percent-encoding of a path segment, whatever text a notice may hold. */
    private static String encoded(String segment) {
        return URLEncoder.encode(segment, StandardCharsets.UTF_8).replace("+", "%20");
    }

    /** The text as far as it is Unicode, cut to a limit without cutting a character in half. */
    private static String cut(String text, int limit) {
        String safe = text.length() <= limit ? text : text.substring(0, limit - 3) + "...";
        // Encoding turns what is left of a surrogate pair into a question mark.
        return new String(safe.getBytes(StandardCharsets.UTF_8), StandardCharsets.UTF_8);
    }
}
