package io.tallyward.connector.format;

import com.fasterxml.jackson.core.JsonParser;
import com.fasterxml.jackson.core.JsonToken;
import io.tallyward.connector.format.Decoded.Accepted;
import io.tallyward.connector.format.Decoded.Refused;
import io.tallyward.engine.event.Event;
import io.tallyward.engine.event.EventSlot;
import io.tallyward.engine.event.RejectReason;
import java.io.IOException;
import java.util.HashMap;
import java.util.List;
import java.util.Map;
import java.util.OptionalLong;
import java.util.stream.Collectors;

/**
 * The fields of one document as they come by, in any order, and the judgement over them once all have been seen. Only the
 * first problem in the order of the fields is told; what it tells never holds the unit.
 */
final class EventDraft {

    /** Longest text of a field, in UTF-16 characters. */
    static final int MAX_TEXT = 256;

    static final int MAX_SEGMENTS = EventSlot.MOST_SEGMENTS;
    static final int MAX_SEGMENT_TEXT = 64;

    private static final EventField[] FIELDS = EventField.values();

    private final EventMapping mapping;
    private final String[] texts = new String[FIELDS.length];
    private final JsonToken[] tokens = new JsonToken[FIELDS.length];
    private final Refused[] problems = new Refused[FIELDS.length];
    private Map<String, String> segments = Map.of();

    EventDraft(EventMapping mapping) {
        this.mapping = mapping;
    }

    /** Takes the value the parser stands on for one or more fields and leaves the parser at its end. */
    void take(List<EventField> fields, JsonParser parser) throws IOException {
        JsonToken token = parser.currentToken();
        String text = scalarText(token, parser);
        boolean tooLong = token.isScalarValue() && text == null;
        for (EventField field : fields) {
            if (tokens[field.ordinal()] != null) {
                refuse(field, RejectReason.UNPARSABLE, "given twice (expected: once)");
            }
            tokens[field.ordinal()] = token;
            texts[field.ordinal()] = text;
            if (tooLong) {
                refuse(field, RejectReason.OVERSIZED, "longer than " + MAX_TEXT + " characters");
            }
        }
        if (token == JsonToken.START_OBJECT && fields.contains(EventField.SEGMENTS)) {
            takeSegments(parser);
        } else {
            parser.skipChildren();
        }
    }

    /** The event, or the first problem. */
    Decoded finish() {
        for (EventField field : FIELDS) {
            check(field);
            if (problems[field.ordinal()] != null) {
                return problems[field.ordinal()];
            }
        }
        Event event = new Event(
                mapping.kinds().get(text(EventField.KIND)),
                text(EventField.EXPERIMENT),
                text(EventField.VARIANT),
                text(EventField.UNIT),
                text(EventField.SOURCE),
                text(EventField.ID),
                millis(EventField.AT),
                text(EventField.VIEW),
                segments);
        boolean received = !text(EventField.RECEIVED).isEmpty();
        return new Accepted(event, received ? OptionalLong.of(millis(EventField.RECEIVED)) : OptionalLong.empty());
    }

    private static String scalarText(JsonToken token, JsonParser parser) throws IOException {
        if (!token.isScalarValue() || token == JsonToken.VALUE_NULL) {
            return "";
        }
        return parser.getTextLength() > MAX_TEXT ? null : parser.getText();
    }

    private void takeSegments(JsonParser parser) throws IOException {
        Map<String, String> found = new HashMap<>();
        for (String name = parser.nextFieldName(); name != null; name = parser.nextFieldName()) {
            JsonToken token = parser.nextToken();
            if (token == JsonToken.VALUE_STRING) {
                takeSegment(found, name, parser);
            } else if (token != JsonToken.VALUE_NULL) {
                String what = "holds " + JsonEventReader.name(token) + " (expected: text only)";
                refuse(EventField.SEGMENTS, RejectReason.MISSING_FIELD, what);
                parser.skipChildren();
            }
        }
        segments = found;
    }

    private void takeSegment(Map<String, String> found, String name, JsonParser parser) throws IOException {
        if (name.length() > MAX_SEGMENT_TEXT || parser.getTextLength() > MAX_SEGMENT_TEXT) {
            String what = "a name or value longer than " + MAX_SEGMENT_TEXT + " characters";
            refuse(EventField.SEGMENTS, RejectReason.OVERSIZED, what);
        } else if (found.size() == MAX_SEGMENTS && !found.containsKey(name)) {
            String what = "more than " + MAX_SEGMENTS + " entries";
            refuse(EventField.SEGMENTS, RejectReason.OVERSIZED, what);
        } else {
            String value = parser.getText();
            if (!wellFormed(name) || !wellFormed(value)) {
                refuse(EventField.SEGMENTS, RejectReason.UNPARSABLE, "holds half a surrogate pair (expected: Unicode)");
            }
            if (found.put(name, value) != null) {
                refuse(EventField.SEGMENTS, RejectReason.UNPARSABLE, "an entry given twice (expected: once)");
            }
        }
    }

    private void check(EventField field) {
        JsonToken token = tokens[field.ordinal()];
        if (problems[field.ordinal()] != null) {
            return;
        }
        if (token == null || token == JsonToken.VALUE_NULL || isEmptyText(field, token)) {
            if (field.required()) {
                String what = token == JsonToken.VALUE_STRING ? "empty" : "missing";
                refuse(field, RejectReason.MISSING_FIELD, what + " (expected: " + expected(field) + ")");
            }
        } else if (!typed(field, token)) {
            String what = JsonEventReader.name(token) + " (expected: " + expected(field) + ")";
            refuse(field, RejectReason.MISSING_FIELD, what);
        } else if (!wellFormed(text(field))) {
            // It has no UTF-8 form, so that two different units could become one.
            refuse(field, RejectReason.UNPARSABLE, "holds half a surrogate pair (expected: Unicode)");
        } else if (field == EventField.KIND && !mapping.kinds().containsKey(text(field))) {
            refuse(field, RejectReason.MISSING_FIELD, shown(field) + " (expected: " + expected(field) + ")");
        } else if (isTime(field) && millis(field) == Rfc3339.UNREADABLE) {
            refuse(field, RejectReason.BAD_TIME, shown(field) + " (expected: " + expected(field) + ")");
        }
    }

    private static boolean typed(EventField field, JsonToken token) {
        if (field == EventField.SEGMENTS) {
            return token == JsonToken.START_OBJECT;
        }
        boolean number = token == JsonToken.VALUE_NUMBER_INT || token == JsonToken.VALUE_NUMBER_FLOAT;
        return token == JsonToken.VALUE_STRING || (number && (field.acceptsNumbers() || isTime(field)));
    }

    private boolean isEmptyText(EventField field, JsonToken token) {
        return token == JsonToken.VALUE_STRING && text(field).isEmpty() && field != EventField.SEGMENTS;
    }

    private static boolean isTime(EventField field) {
        return field == EventField.AT || field == EventField.RECEIVED;
    }

    private String expected(EventField field) {
        return switch (field) {
            case KIND -> mapping.kinds().keySet().stream().map(Quoted::of).collect(Collectors.joining(" or "));
            case AT, RECEIVED -> "an RFC 3339 time or whole milliseconds since 1970, years 0000 to 9999";
            case SEGMENTS -> "an object of text";
            case UNIT, ID, VIEW -> "text or a number";
            case EXPERIMENT, VARIANT, SOURCE -> "text";
        };
    }

    /** The value found, unless it gives the unit away: a wrong pointer may lead to it under another field's name. */
    private String shown(EventField field) {
        String unit = text(EventField.UNIT);
        return !unit.isEmpty() && text(field).contains(unit) ? "a value like the unit" : Quoted.of(text(field));
    }

    private String text(EventField field) {
        String text = texts[field.ordinal()];
        return text == null ? "" : text;
    }

    private long millis(EventField field) {
        char[] text = text(field).toCharArray();
        return EventTime.millis(tokens[field.ordinal()], text, 0, text.length);
    }

    private void refuse(EventField field, RejectReason reason, String what) {
        if (problems[field.ordinal()] == null) {
            String detail = field.code() + " at " + mapping.pointers().get(field) + ": " + what;
            problems[field.ordinal()] = new Refused(reason, Quoted.sentence(detail));
        }
    }

    private static boolean wellFormed(String text) {
        for (int i = 0; i < text.length(); i++) {
            if (Character.isSurrogate(text.charAt(i))) {
                boolean pair = i + 1 < text.length() && Character.isSurrogatePair(text.charAt(i), text.charAt(i + 1));
                if (!pair) {
                    return false;
                }
                i++;
            }
        }
        return true;
    }
}
