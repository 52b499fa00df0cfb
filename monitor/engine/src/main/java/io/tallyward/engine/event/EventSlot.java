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

    private static final int ASCII_END = 0x80;

    private final CRC32 crc = new CRC32();
    private EventKind kind = EventKind.VIEW;
    private int experiment;
    private int variant;
    private byte[] unit = new byte[256];
    private int unitLength;
    private byte[] id = new byte[256];
    private int tie;
    private long atMillis;

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

    /** Sets the id from ASCII characters; returns false, and leaves it undefined, when there are others among them. */
    public boolean id(char[] text, int from, int length) {
        id = room(id, length);
        boolean ascii = narrow(text, from, length, id);
        digest(id, length);
        return ascii;
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

    /** Takes an event whose experiment and variant have the given positions. */
    public void take(Event event, int experimentIndex, int variantIndex) {
        kind = event.kind();
        place(experimentIndex, variantIndex);
        unit = event.unit().getBytes(StandardCharsets.UTF_8);
        unitLength = unit.length;
        byte[] name = event.id().getBytes(StandardCharsets.UTF_8);
        digest(name, name.length);
        atMillis = event.atMillis();
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
                && Arrays.equals(unit, 0, unitLength, other.unit, 0, other.unitLength);
    }
}
