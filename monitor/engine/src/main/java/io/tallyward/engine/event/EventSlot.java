package io.tallyward.engine.event;

import java.nio.charset.StandardCharsets;
import java.util.Arrays;
import java.util.zip.CRC32;

/**
 * What counting has to know of one event, in a place that is used again for the next: the form in which millions of events
 * a second pass without leaving anything behind. {@link Event} is the same event as a value. An event in a slot belongs to a
 * known experiment and variant, which are given as positions in the {@link io.tallyward.engine.plan.PlanNames} of the shard
 * that counts it. Not thread-safe.
 */
public final class EventSlot {

    /** Most segments of one event. */
    public static final int MOST_SEGMENTS = 8;

    private static final int ASCII_END = 0x80;

    private final CRC32 crc = new CRC32();
    private EventKind kind = EventKind.VIEW;
    private int experiment;
    private int variant;
    private byte[] unit = new byte[256];
    private int unitLength;
    private byte[] id = new byte[256];
    private int idLength;
    private byte[] source = new byte[256];
    private int sourceLength;
    private byte[] viewId = new byte[256];
    private int viewIdLength;
    private int tie;
    private long atMillis;

    private final int[] segmentFields = new int[MOST_SEGMENTS];
    private final int[] segmentLengths = new int[MOST_SEGMENTS];
    private final char[][] segmentTexts = new char[MOST_SEGMENTS][];
    private int segments;

    /** Sets what happened. */
    public void kind(EventKind happened) {
        kind = happened;
    }

    /** Sets experiment and variant by their positions. */
    public void place(int experimentIndex, int variantIndex) {
        experiment = experimentIndex;
        variant = variantIndex;
    }

    /** Sets the event time, milliseconds since the epoch. */
    public void at(long millis) {
        atMillis = millis;
    }

    /** Sets the unit from ASCII characters; returns false, and leaves it undefined, when there are others among them. */
    public boolean unit(char[] text, int from, int length) {
        unit = room(unit, length);
        unitLength = length;
        return narrow(text, from, length, unit);
    }

    /** Makes what an event need not have empty; the rest of it is set in any case. */
    public void clear() {
        sourceLength = 0;
        viewIdLength = 0;
        segments = 0;
    }

    /** Sets the source from ASCII characters; returns false, and leaves it undefined, when there are others among them. */
    public boolean source(char[] text, int from, int length) {
        source = room(source, length);
        sourceLength = length;
        return narrow(text, from, length, source);
    }

    /** Sets the view id from ASCII characters; returns false, and leaves it undefined, when there are others among them. */
    public boolean viewId(char[] text, int from, int length) {
        viewId = room(viewId, length);
        viewIdLength = length;
        return narrow(text, from, length, viewId);
    }

    /** Sets the id from ASCII characters; returns false, and leaves it undefined, when there are others among them. */
    public boolean id(char[] text, int from, int length) {
        id = room(id, length);
        idLength = length;
        boolean ascii = narrow(text, from, length, id);
        digest(id, length);
        return ascii;
    }

    /**
     * Adds a segment.
     *
     * @param field position of its name among the fields that plans name
     */
    public void segment(int field, char[] text, int from, int length) {
        if (segments == MOST_SEGMENTS) {
            throw new IllegalStateException("segments: more than " + MOST_SEGMENTS + " (expected: at most that many)");
        }
        if (segmentTexts[segments] == null || segmentTexts[segments].length < length) {
            segmentTexts[segments] = new char[Math.max(64, length)];
        }
        System.arraycopy(text, from, segmentTexts[segments], 0, length);
        segmentFields[segments] = field;
        segmentLengths[segments++] = length;
    }

    /** Where the slot keeps the segment of a field, or -1 when the event has none. */
    public int segment(int field) {
        for (int i = 0; i < segments; i++) {
            if (segmentFields[i] == field) {
                return i;
            }
        }
        return -1;
    }

    /** Characters of a segment that is kept here; only the first {@link #segmentLength} belong to it. */
    public char[] segmentText(int place) {
        return segmentTexts[place];
    }

    /** How many characters a segment has that is kept here. */
    public int segmentLength(int place) {
        return segmentLengths[place];
    }

    private static byte[] room(byte[] bytes, int length) {
        return bytes.length < length ? new byte[length] : bytes;
    }

    private static boolean narrow(char[] text, int from, int length, byte[] to) {
        int all = 0;
        for (int i = 0; i < length; i++) {
            char c = text[from + i];
            all |= c;
            to[i] = (byte) c;
        }
        return all < ASCII_END;
    }

    private void digest(byte[] bytes, int length) {
        crc.reset();
        crc.update(bytes, 0, length);
        tie = (int) crc.getValue();
    }

    /**
     * Takes an event whose experiment and variant have the given positions.
     *
     * @param fields the segment fields that plans name; others are left
     */
    public void take(Event event, int experimentIndex, int variantIndex, NameTable fields) {
        kind = event.kind();
        place(experimentIndex, variantIndex);
        unit = event.unit().getBytes(StandardCharsets.UTF_8);
        unitLength = unit.length;
        id = event.id().getBytes(StandardCharsets.UTF_8);
        idLength = id.length;
        digest(id, idLength);
        source = event.source().getBytes(StandardCharsets.UTF_8);
        sourceLength = source.length;
        viewId = event.viewId().getBytes(StandardCharsets.UTF_8);
        viewIdLength = viewId.length;
        atMillis = event.atMillis();
        segments = 0;
        if (fields.size() > 0) {
            event.segments().forEach((field, value) -> takeSegment(fields.find(field), value));
        }
    }

    private void takeSegment(int field, String value) {
        if (field >= 0) {
            segment(field, value.toCharArray(), 0, value.length());
        }
    }

    /** What happened. */
    public EventKind kind() {
        return kind;
    }

    /** Position of the experiment. */
    public int experiment() {
        return experiment;
    }

    /** Position of the variant in its plan. */
    public int variant() {
        return variant;
    }

    /** The unit in UTF-8; only the first {@link #unitLength()} bytes belong to it, and only until the slot is used again. */
    public byte[] unit() {
        return unit;
    }

    /** How many bytes the unit has. */
    public int unitLength() {
        return unitLength;
    }

    /** The id in UTF-8; only the first {@link #idLength()} bytes belong to it, and only until the slot is used again. */
    public byte[] id() {
        return id;
    }

    /** How many bytes the id has. */
    public int idLength() {
        return idLength;
    }

    /** The emitter of the event in UTF-8, as {@link #id()} is given. */
    public byte[] source() {
        return source;
    }

    /** How many bytes the source has; 0 when the event names none. */
    public int sourceLength() {
        return sourceLength;
    }

    /** The id of the view that was clicked in UTF-8, as {@link #id()} is given. */
    public byte[] viewId() {
        return viewId;
    }

    /** How many bytes the view id has; 0 when the event names none. */
    public int viewIdLength() {
        return viewIdLength;
    }

    /**
     * Breaks ties between exposures of one unit at one moment: the CRC-32 of the id in UTF-8, to be compared without sign.
     * Like the ids themselves it favours no variant, and unlike them it takes four bytes to remember.
     */
    public int tie() {
        return tie;
    }

    /** Event time, milliseconds since the epoch. */
    public long atMillis() {
        return atMillis;
    }

    /** For messages; does not tell the unit. */
    @Override
    public String toString() {
        return "EventSlot[" + kind + ", " + experiment + "/" + variant + ", " + atMillis + "]";
    }

    /** Whether another slot holds the same event. */
    public boolean holdsTheSameAs(EventSlot other) {
        return kind == other.kind
                && experiment == other.experiment
                && variant == other.variant
                && tie == other.tie
                && atMillis == other.atMillis
                && Arrays.equals(unit, 0, unitLength, other.unit, 0, other.unitLength)
                && Arrays.equals(id, 0, idLength, other.id, 0, other.idLength)
                && Arrays.equals(source, 0, sourceLength, other.source, 0, other.sourceLength)
                && Arrays.equals(viewId, 0, viewIdLength, other.viewId, 0, other.viewIdLength)
                && holdsTheSameSegmentsAs(other);
    }

    private boolean holdsTheSameSegmentsAs(EventSlot other) {
        boolean same = segments == other.segments;
        for (int i = 0; i < segments && same; i++) {
            int place = other.segment(segmentFields[i]);
            same = place >= 0
                    && Arrays.equals(
                            segmentTexts[i],
                            0,
                            segmentLengths[i],
                            other.segmentTexts[place],
                            0,
                            other.segmentLengths[place]);
        }
        return same;
    }
}
