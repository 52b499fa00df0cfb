package io.tallyward.engine.count;

import static io.tallyward.engine.shard.Packing.pack;

import io.tallyward.engine.event.EventSlot;
import io.tallyward.engine.event.NameTable;
import java.io.DataInputStream;
import java.io.DataOutput;
import java.io.IOException;
import java.util.ArrayList;
import java.util.Arrays;
import java.util.Collections;
import java.util.List;
import java.util.TreeSet;

/**
 * The combinations of segment values that were seen in one experiment and partition, each under a code of two bytes, so that
 * a unit can remember its own, and the values that are told. Not thread-safe.
 *
 * <p>Segments are meant for fields of few values. Where there are more than {@value #MOST_TUPLES} combinations, further ones
 * are told as {@code other} in every field; of the values of one field {@value #MOST_VALUES} are told, those that were sealed
 * first (of one window, those of the most units, then by name), and further ones as {@code other}. Within these bounds
 * nothing depends on the order in which events arrive. A view without a field, or with an empty one, has the value
 * {@code none}.
 *
 * <p>Durable as batches of what is new, each written once and before the units that refer to it.
 */
final class SegmentTable {

    /** Code of a combination for which there was no room. */
    static final int OTHER = 0;

    /** Combinations that are kept apart; their codes are 1 and up. */
    static final int MOST_TUPLES = 4095;

    /** Values of one field that are told apart from {@code other}. */
    static final int MOST_VALUES = 32;

    static final String OTHER_VALUE = "other";
    private static final String NO_VALUE = "none";

    private static final int SLOTS = 8192;

    /** Bytes of a character in a stored text, at most. */
    private static final int MOST_UTF = 3;

    private final List<String> fields;
    private final int[] positions;
    private final List<String[]> tuples = new ArrayList<>();
    private final List<TreeSet<String>> told = new ArrayList<>();
    private short[] slots = new short[16];
    private final List<Integer> batches = new ArrayList<>();
    private int written;
    private int writtenValues;

    /**
     * @param fields the fields that the plan names
     * @param names the fields that any plan names, as an event's slot knows them
     */
    SegmentTable(List<String> fields, NameTable names) {
        this.fields = fields;
        positions = fields.stream().mapToInt(names::find).toArray();
        fields.forEach(field -> told.add(new TreeSet<>()));
    }

    /** The fields, in the order of the values. */
    List<String> fields() {
        return fields;
    }

    /** The code of an event's segments; a combination that was not seen before gets one if there is room. */
    int code(EventSlot event) {
        int slot = hash(event) & slots.length - 1;
        while (slots[slot] != 0) {
            if (isOf(tuples.get(slots[slot] - 1), event)) {
                return slots[slot];
            }
            slot = slot + 1 & slots.length - 1;
        }
        if (tuples.size() == MOST_TUPLES) {
            return OTHER;
        }
        String[] tuple = new String[fields.size()];
        for (int field = 0; field < tuple.length; field++) {
            int place = event.segment(positions[field]);
            boolean none = place < 0 || event.segmentLength(place) == 0;
            tuple[field] = none ? NO_VALUE : new String(event.segmentText(place), 0, event.segmentLength(place));
        }
        return add(tuple);
    }

    private int add(String[] tuple) {
        tuples.add(tuple);
        if (4 * tuples.size() > slots.length && slots.length < SLOTS) {
            slots = new short[2 * slots.length];
            for (int code = 1; code <= tuples.size(); code++) {
                enter(tuples.get(code - 1), code);
            }
        } else {
            enter(tuple, tuples.size());
        }
        return tuples.size();
    }

    private void enter(String[] tuple, int code) {
        int slot = Arrays.hashCode(tuple) & slots.length - 1;
        while (slots[slot] != 0) {
            slot = slot + 1 & slots.length - 1;
        }
        slots[slot] = (short) code;
    }

    /** What {@link Arrays#hashCode(Object[])} says of the tuple of an event. */
    private int hash(EventSlot event) {
        int hash = 1;
        for (int position : positions) {
            int place = event.segment(position);
            int length = place < 0 ? 0 : event.segmentLength(place);
            int value = length == 0 ? NO_VALUE.hashCode() : 0;
            for (int i = 0; i < length; i++) {
                value = 31 * value + event.segmentText(place)[i];
            }
            hash = 31 * hash + value;
        }
        return hash;
    }

    private boolean isOf(String[] tuple, EventSlot event) {
        for (int field = 0; field < tuple.length; field++) {
            int place = event.segment(positions[field]);
            boolean none = place < 0 || event.segmentLength(place) == 0;
            boolean same = none
                    ? tuple[field].equals(NO_VALUE)
                    : spells(event.segmentText(place), event.segmentLength(place), tuple[field]);
            if (!same) {
                return false;
            }
        }
        return true;
    }

    private static boolean spells(char[] text, int length, String value) {
        if (value.length() != length) {
            return false;
        }
        for (int i = 0; i < length; i++) {
            if (text[i] != value.charAt(i)) {
                return false;
            }
        }
        return true;
    }

    /** The value of a field under a code. */
    String value(int code, int field) {
        return code == OTHER ? OTHER_VALUE : tuples.get(code - 1)[field];
    }

    /** Whether a value of a field is told under its own name. */
    boolean isTold(int field, String value) {
        return value.equals(OTHER_VALUE) || told.get(field).contains(value);
    }

    /** Tells a value under its own name from now on, if there is room; returns whether it is. */
    boolean tell(int field, String value) {
        return isTold(field, value)
                || (told.get(field).size() < MOST_VALUES && told.get(field).add(value));
    }

    /** Takes a batch of what is new as entries write it down. */
    interface Batches {
        /** @param sequence numbers the batch: 0, which replaces what it was before, or the first code in it */
        void take(int sequence, byte[] packed);
    }

    /** Gives what was not given before: combinations in batches of bounded size by their first code, values by 0. */
    void takeNew(int mostBytes, Batches taker) {
        while (written < tuples.size()) {
            int from = written;
            int bytes = 0;
            while (written < tuples.size() && bytes < mostBytes) {
                for (String value : tuples.get(written)) {
                    bytes += Short.BYTES + MOST_UTF * value.length();
                }
                written++;
            }
            batches.add(from + 1);
            taker.take(from + 1, pack(out -> write(out, from)));
        }
        if (toldValues() > writtenValues) {
            writtenValues = toldValues();
            taker.take(0, pack(this::writeTold));
        }
    }

    /** Forgets everything; returns the numbers of the batches there are, the youngest first. */
    List<Integer> clear() {
        List<Integer> given = new ArrayList<>(batches);
        Collections.reverse(given);
        if (writtenValues > 0) {
            given.add(0, 0);
        }
        batches.clear();
        tuples.clear();
        told.forEach(TreeSet::clear);
        Arrays.fill(slots, (short) 0);
        written = 0;
        writtenValues = 0;
        return given;
    }

    private void write(DataOutput out, int from) throws IOException {
        out.writeByte(fields.size());
        for (String[] tuple : tuples.subList(from, written)) {
            for (String value : tuple) {
                out.writeUTF(value);
            }
        }
    }

    private void writeTold(DataOutput out) throws IOException {
        out.writeByte(fields.size());
        for (TreeSet<String> ofField : told) {
            out.writeInt(ofField.size());
            for (String value : ofField) {
                out.writeUTF(value);
            }
        }
    }

    /** Restores a batch as it was given; one that was written under another plan is left to whoever refuses that. */
    void restore(int sequence, DataInputStream in) throws IOException {
        if (in.readByte() != fields.size()) {
            return;
        }
        if (sequence == 0) {
            for (TreeSet<String> ofField : told) {
                for (int rest = in.readInt(); rest > 0; rest--) {
                    ofField.add(in.readUTF());
                }
            }
            writtenValues = toldValues();
            return;
        }
        if (sequence <= tuples.size()) {
            return;
        }
        if (sequence != tuples.size() + 1) {
            throw new IllegalStateException("stored segments: batch " + sequence + " (expected: batch "
                    + (tuples.size() + 1) + ", as many combinations as are known)");
        }
        batches.add(sequence);
        while (in.available() > 0) {
            String[] tuple = new String[fields.size()];
            for (int field = 0; field < tuple.length; field++) {
                tuple[field] = in.readUTF();
            }
            add(tuple);
        }
        written = tuples.size();
    }

    private int toldValues() {
        return told.stream().mapToInt(TreeSet::size).sum();
    }
}
