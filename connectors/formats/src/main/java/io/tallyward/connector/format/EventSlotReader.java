package io.tallyward.connector.format;

import com.fasterxml.jackson.core.JsonFactory;
import com.fasterxml.jackson.core.JsonParser;
import com.fasterxml.jackson.core.JsonToken;
import io.tallyward.connector.format.MemberOrder.Member;
import io.tallyward.engine.event.EventKind;
import io.tallyward.engine.event.EventSlot;
import io.tallyward.engine.event.NameTable;
import io.tallyward.engine.plan.PlanNames;
import java.io.IOException;
import java.io.OutputStream;
import java.io.UncheckedIOException;
import java.util.List;

/**
 * Reads plain documents, which nearly all are, without leaving anything behind: one parser for all of them, no tree, no
 * text. Whatever is not plain is left to {@link JsonEventReader}, which alone decides what is refused and why: anything
 * that is not well-formed or not an event, an experiment or a variant without a plan, text that is not ASCII, pointers into
 * arrays. What is plain, {@link JsonEventReader} reads as the same event. Not thread-safe.
 */
public final class EventSlotReader {

    private static final int REQUIRED = required();
    private static final int TEXT_OR_NUMBER = bit(EventField.UNIT) | bit(EventField.ID) | bit(EventField.VIEW);
    private static final int TIME = bit(EventField.AT) | bit(EventField.RECEIVED);
    private static final int ASCII_END = 0x80;
    private static final OutputStream NOWHERE = OutputStream.nullOutputStream();

    private final MemberOrder order;
    private final int maxEventBytes;
    private final JsonFactory factory;
    private final PlanNames names;
    private final NameTable segmentFields;
    private final NameTable kinds;
    private final EventKind[] meanings;
    private final SegmentNames segmentNames = new SegmentNames();

    private final DocumentStream document = new DocumentStream();

    /** Null until the next document, and after one that was not plain. */
    private JsonParser parser;

    private int seen;
    private final char[] experimentText = new char[EventDraft.MAX_TEXT];
    private int experimentLength;
    private final char[] variantText = new char[EventDraft.MAX_TEXT];
    private int variantLength;

    /**
     * Prepares to read.
     *
     * @param mapping where the fields are
     * @param maxEventBytes the largest document that is read, at least 1
     * @param names the experiments and variants that are known, and the segment fields to keep
     */
    public EventSlotReader(EventMapping mapping, int maxEventBytes, PlanNames names) {
        this.order = new MemberOrder(PointerTree.of(mapping.pointers()));
        this.maxEventBytes = maxEventBytes;
        this.factory = JsonEventReader.factory(maxEventBytes);
        this.names = names;
        this.segmentFields = names.segments();
        this.kinds = new NameTable(mapping.kinds().keySet());
        this.meanings = mapping.kinds().values().toArray(EventKind[]::new);
    }

    private static int bit(EventField field) {
        return 1 << field.ordinal();
    }

    private static int required() {
        int mask = 0;
        for (EventField field : EventField.values()) {
            mask |= field.required() ? bit(field) : 0;
        }
        return mask;
    }

    /**
     * Reads one record's value into a slot.
     *
     * @return false when the document is not plain; the slot is then undefined
     */
    public boolean read(byte[] value, EventSlot slot) {
        if (value == null || value.length > maxEventBytes) {
            return false;
        }
        int length = value.length;
        while (length > 0 && isBlank(value[length - 1])) {
            length--;
        }
        boolean plain = false;
        try {
            feed(value, length);
            slot.clear();
            plain = parser.nextToken() == JsonToken.START_OBJECT && members(order, slot) && ended() && finish(slot);
        } catch (IOException notWellFormed) {
            plain = false;
        } finally {
            if (!plain) {
                forget();
            }
        }
        return plain;
    }

    private static boolean isBlank(byte b) {
        return b == ' ' || b == '\n' || b == '\r' || b == '\t';
    }

    /** One document follows another in the same parser as long as all end where their last bracket does. */
    private void feed(byte[] value, int length) throws IOException {
        seen = 0;
        document.set(value, length);
        if (parser == null) {
            parser = factory.createParser(document);
        }
    }

    private boolean ended() throws IOException {
        return document.available() == 0 && parser.releaseBuffered(NOWHERE) == 0;
    }

    private void forget() {
        JsonParser spoilt = parser;
        parser = null;
        try {
            if (spoilt != null) {
                spoilt.close();
            }
        } catch (IOException e) {
            throw new UncheckedIOException("closing a parser of memory failed", e);
        }
    }

    private boolean members(MemberOrder members, EventSlot slot) throws IOException {
        Member member = members.start();
        while (true) {
            Member expected = member.next();
            if (expected != null && parser.nextFieldName(expected.name())) {
                member = expected;
            } else {
                JsonToken token = expected == null ? parser.nextToken() : parser.currentToken();
                if (token != JsonToken.FIELD_NAME) {
                    return token == JsonToken.END_OBJECT;
                }
                member = members.follow(member, parser.currentName());
            }
            if (!place(member, parser.nextToken(), slot)) {
                return false;
            }
        }
    }

    private boolean place(Member member, JsonToken token, EventSlot slot) throws IOException {
        PointerTree node = member.node();
        if (node == null) {
            parser.skipChildren();
            return true;
        }
        List<EventField> fields = node.fields();
        if (fields.isEmpty()) {
            return token == JsonToken.START_OBJECT ? members(member.below(), slot) : token.isScalarValue();
        }
        for (int i = 0; i < fields.size(); i++) {
            if (!take(fields.get(i), token, slot)) {
                return false;
            }
        }
        return true;
    }

    private boolean take(EventField field, JsonToken token, EventSlot slot) throws IOException {
        int bit = bit(field);
        if ((seen & bit) != 0) {
            return false;
        }
        seen |= bit;
        if (token == JsonToken.VALUE_NULL) {
            return (bit & REQUIRED) == 0;
        }
        if (field == EventField.SEGMENTS) {
            return token == JsonToken.START_OBJECT && segments(slot);
        }
        boolean number = token == JsonToken.VALUE_NUMBER_INT || token == JsonToken.VALUE_NUMBER_FLOAT;
        boolean typed = token == JsonToken.VALUE_STRING || (number && (bit & (TEXT_OR_NUMBER | TIME)) != 0);
        if (!typed) {
            return false;
        }
        int length = parser.getTextLength();
        if (length == 0) {
            return (bit & REQUIRED) == 0;
        }
        return length <= EventDraft.MAX_TEXT
                && take(field, token, parser.getTextCharacters(), parser.getTextOffset(), length, slot);
    }

    private boolean take(EventField field, JsonToken token, char[] text, int from, int length, EventSlot slot) {
        switch (field) {
            case UNIT:
                return slot.unit(text, from, length);
            case ID:
                return slot.id(text, from, length);
            case SOURCE:
                return slot.source(text, from, length);
            case VIEW:
                return slot.viewId(text, from, length);
            case AT:
                long at = EventTime.millis(token, text, from, length);
                slot.at(at);
                return at != Rfc3339.UNREADABLE;
            case RECEIVED:
                return EventTime.millis(token, text, from, length) != Rfc3339.UNREADABLE;
            case KIND:
                int kind = kinds.find(text, from, length);
                if (kind < 0) {
                    return false;
                }
                slot.kind(meanings[kind]);
                return isAscii(text, from, length);
            case EXPERIMENT:
                System.arraycopy(text, from, experimentText, 0, length);
                experimentLength = length;
                return isAscii(text, from, length);
            case VARIANT:
                System.arraycopy(text, from, variantText, 0, length);
                variantLength = length;
                return isAscii(text, from, length);
            default:
                return isAscii(text, from, length);
        }
    }

    /** Segments that no plan names must be well-formed all the same. */
    private boolean segments(EventSlot slot) throws IOException {
        segmentNames.clear();
        JsonToken token = parser.nextToken();
        while (token == JsonToken.FIELD_NAME) {
            String name = parser.currentName();
            JsonToken value = parser.nextToken();
            if (value == JsonToken.VALUE_STRING) {
                int length = parser.getTextLength();
                if (length > EventDraft.MAX_SEGMENT_TEXT
                        || !isAscii(parser.getTextCharacters(), parser.getTextOffset(), length)
                        || !segmentNames.add(name)) {
                    return false;
                }
                if (segmentFields.size() > 0) {
                    keep(name, length, slot);
                }
            } else if (value != JsonToken.VALUE_NULL) {
                return false;
            }
            token = parser.nextToken();
        }
        return token == JsonToken.END_OBJECT;
    }

    private void keep(String name, int length, EventSlot slot) throws IOException {
        int field = segmentFields.find(name);
        if (field >= 0) {
            slot.segment(field, parser.getTextCharacters(), parser.getTextOffset(), length);
        }
    }

    private static boolean isAscii(char[] text, int from, int length) {
        int all = 0;
        for (int i = from; i < from + length; i++) {
            all |= text[i];
        }
        return all < ASCII_END;
    }

    private boolean finish(EventSlot slot) {
        if ((seen & REQUIRED) != REQUIRED) {
            return false;
        }
        int experiment = names.experiment(experimentText, 0, experimentLength);
        int variant = experiment < 0 ? -1 : names.variant(experiment, variantText, 0, variantLength);
        slot.place(experiment, variant);
        return variant >= 0;
    }
}
