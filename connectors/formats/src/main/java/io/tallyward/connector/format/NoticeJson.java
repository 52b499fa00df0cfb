package io.tallyward.connector.format;

import com.fasterxml.jackson.core.JsonGenerator;
import io.tallyward.engine.record.Notice;
import io.tallyward.engine.record.Notice.Kind;
import io.tallyward.engine.record.Notice.Severity;
import java.io.IOException;
import java.util.Map;

/** Notices as JSON, the form of the outbox: {@code schema/notice.schema.json}. The order of the facts is kept. */
public final class NoticeJson {

    private NoticeJson() {}

    /** The notice as one JSON object in UTF-8. */
    public static byte[] write(Notice notice) {
        return JsonBytes.object(notice, NoticeJson::members);
    }

    /**
     * Reads what {@link #write} wrote.
     *
     * @throws RecordFormatException if a member is missing or wrong; members it does not know are ignored
     */
    public static Notice read(byte[] bytes) {
        JsonMembers notice = JsonMembers.of("notice", bytes);
        return new Notice(
                notice.text("id"),
                notice.code("kind", Kind.values(), Kind::code),
                notice.code("severity", Severity.values(), Severity::code),
                notice.text("experiment"),
                notice.text("variant"),
                notice.instant("at"),
                notice.text("summary"),
                notice.object("facts").texts(),
                notice.text("action"),
                notice.text("decision"));
    }

    private static void members(JsonGenerator json, Notice notice) throws IOException {
        JsonBytes.text(json, "id", notice.id());
        JsonBytes.text(json, "kind", notice.kind().code());
        JsonBytes.text(json, "severity", notice.severity().code());
        JsonBytes.text(json, "experiment", notice.experiment());
        JsonBytes.text(json, "variant", notice.variant());
        JsonBytes.instant(json, "at", notice.at());
        JsonBytes.text(json, "summary", notice.summary());
        json.writeObjectFieldStart("facts");
        for (Map.Entry<String, String> fact : notice.facts().entrySet()) {
            JsonBytes.text(json, fact.getKey(), fact.getValue());
        }
        json.writeEndObject();
        JsonBytes.text(json, "action", notice.action());
        JsonBytes.text(json, "decision", notice.decision());
    }
}
