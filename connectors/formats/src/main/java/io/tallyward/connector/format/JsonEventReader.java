package io.tallyward.connector.format;

import com.fasterxml.jackson.core.JsonFactory;
import com.fasterxml.jackson.core.JsonFactoryBuilder;
import com.fasterxml.jackson.core.JsonParser;
import com.fasterxml.jackson.core.JsonProcessingException;
import com.fasterxml.jackson.core.JsonToken;
import com.fasterxml.jackson.core.StreamReadConstraints;
import com.fasterxml.jackson.core.exc.StreamConstraintsException;
import io.tallyward.connector.format.Decoded.Refused;
import io.tallyward.engine.event.RejectReason;
import java.io.IOException;

/**
 * Reads events from JSON documents (RFC 8259, UTF-8), one per record, in a single streaming pass whatever the depth of the
 * mapping's pointers.
 *
 * <p>A document is refused, never thrown about. What decides, in this order: its size and syntax as a whole (so that a
 * truncated document is never half believed), then its fields in the order of {@link EventField}. A mapped field that is
 * given twice makes the document ambiguous and therefore unparsable; duplicates elsewhere are not looked at. An explicit
 * null is an absent field. Reading costs time proportional to the bytes. Instances are immutable and may be shared.
 */
public final class JsonEventReader {

    private static final int MAX_NESTING = 32;

    private final EventMapping mapping;
    private final PointerTree pointers;
    private final int maxEventBytes;
    private final JsonFactory factory;

    /**
     * Prepares to read.
     *
     * @param mapping where the fields are
     * @param maxEventBytes the largest document that is read, at least 1
     */
    public JsonEventReader(EventMapping mapping, int maxEventBytes) {
        if (maxEventBytes < 1) {
            throw new IllegalArgumentException("maxEventBytes: " + maxEventBytes + " (expected: at least 1)");
        }
        this.mapping = mapping;
        this.pointers = PointerTree.of(mapping.pointers());
        this.maxEventBytes = maxEventBytes;
        this.factory = factory(maxEventBytes);
    }

    /** Makes parsers for documents of a limited size. */
    static JsonFactory factory(int maxEventBytes) {
        // Member names come from outside: interning them would fill a table of the whole process.
        return new JsonFactoryBuilder()
                .streamReadConstraints(StreamReadConstraints.builder()
                        .maxNestingDepth(MAX_NESTING)
                        .maxNameLength(maxEventBytes)
                        .maxStringLength(maxEventBytes)
                        .build())
                .disable(JsonFactory.Feature.INTERN_FIELD_NAMES)
                .disable(JsonFactory.Feature.CHARSET_DETECTION)
                .build();
    }

    /** Reads one record's value, which may be null or any bytes at all. */
    public Decoded read(byte[] value) {
        if (value == null) {
            return new Refused(RejectReason.UNPARSABLE, "the record has no value (expected: a JSON object)");
        }
        if (value.length > maxEventBytes) {
            return new Refused(
                    RejectReason.OVERSIZED,
                    "the record has " + value.length + " bytes (expected: at most " + maxEventBytes + ")");
        }
        int start = startsWithByteOrderMark(value) ? 3 : 0;
        try (JsonParser parser = factory.createParser(value, start, value.length - start)) {
            return document(parser);
        } catch (StreamConstraintsException e) {
            return new Refused(
                    RejectReason.OVERSIZED,
                    "the document is nested deeper than " + MAX_NESTING
                            + " levels or holds a number of over 1000 digits" + near(e));
        } catch (JsonProcessingException e) {
            // The library's own message quotes the document, and with it perhaps a unit.
            return new Refused(RejectReason.UNPARSABLE, "the value is not JSON" + near(e));
        } catch (IOException e) {
            return new Refused(RejectReason.UNPARSABLE, "the value is not UTF-8 text (expected: a JSON object)");
        }
    }

    private Decoded document(JsonParser parser) throws IOException {
        JsonToken first = parser.nextToken();
        if (first != JsonToken.START_OBJECT) {
            return new Refused(RejectReason.UNPARSABLE, "the value is " + name(first) + " (expected: a JSON object)");
        }
        EventDraft draft = new EventDraft(mapping);
        members(parser, pointers, draft);
        if (parser.nextToken() != null) {
            return new Refused(
                    RejectReason.UNPARSABLE, "the value goes on after its first JSON object (expected: one)");
        }
        return draft.finish();
    }

    private static void members(JsonParser parser, PointerTree node, EventDraft draft) throws IOException {
        for (String name = parser.nextFieldName(); name != null; name = parser.nextFieldName()) {
            parser.nextToken();
            place(parser, node.child(name), draft);
        }
    }

    private static void elements(JsonParser parser, PointerTree node, EventDraft draft) throws IOException {
        for (int index = 0; parser.nextToken() != JsonToken.END_ARRAY; index++) {
            place(parser, node.child(Integer.toString(index)), draft);
        }
    }

    private static void place(JsonParser parser, PointerTree node, EventDraft draft) throws IOException {
        if (node == null) {
            parser.skipChildren();
        } else if (!node.fields().isEmpty()) {
            draft.take(node.fields(), parser);
        } else if (parser.currentToken() == JsonToken.START_OBJECT) {
            members(parser, node, draft);
        } else if (parser.currentToken() == JsonToken.START_ARRAY) {
            elements(parser, node, draft);
        }
    }

    /** RFC 8259, section 8.1: a mark must not be written, but may be ignored. */
    private static boolean startsWithByteOrderMark(byte[] value) {
        return value.length >= 3 && value[0] == (byte) 0xEF && value[1] == (byte) 0xBB && value[2] == (byte) 0xBF;
    }

    /** What a token is, in words. */
    static String name(JsonToken token) {
        if (token == null) {
            return "empty";
        }
        return switch (token) {
            case START_OBJECT -> "an object";
            case START_ARRAY -> "an array";
            case VALUE_STRING -> "text";
            case VALUE_NUMBER_INT, VALUE_NUMBER_FLOAT -> "a number";
            case VALUE_TRUE, VALUE_FALSE -> "true or false";
            case VALUE_NULL -> "null";
            case NOT_AVAILABLE, FIELD_NAME, END_OBJECT, END_ARRAY, VALUE_EMBEDDED_OBJECT -> "no value";
        };
    }

    private static String near(JsonProcessingException e) {
        return e.getLocation() == null
                ? ""
                : ", at byte " + Math.max(0, e.getLocation().getByteOffset());
    }
}
