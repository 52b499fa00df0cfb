package io.tallyward.engine.count;

import java.io.DataOutput;
import java.io.IOException;
import java.util.Arrays;

/**
 * A unit whose views are counted, each of them a trial: what its sealed windows came to, and the views and clicks that may
 * still change. It is the working form; {@link ViewedUnits} keeps it at rest.
 *
 * <p>The first exposure by event time fixes the variant of the unit, as in counting by unit. It is final once a view has been
 * sealed: windows are sealed in order, and an earlier view would be late.
 */
final class ViewedUnit {

    /**
     * Views and clicks of one unit that are kept at a time. A person does not look so often within the time a window stays open;
     * a bot may, and further events of it are then only counted, as repeats.
     */
    static final int MOST_EVENTS = 1_000;

    /** The name of no view. */
    static final long UNNAMED = 0;

    private int variant;
    private long first;
    private int trials;
    private int successes;
    private long lastTrial;

    private int size;
    private boolean[] clicks = new boolean[4];
    private int[] variants = new int[4];
    private long[] times = new long[4];
    private long[] keys = new long[4];
    private long[] names = new long[4];
    private int[] ties = new int[4];
    private int[] copies = new int[4];
    private int[] segments = new int[4];

    /** Makes it a unit of which nothing is known yet. */
    void clear() {
        settled(0, 0, 0, 0, 0);
        size = 0;
    }

    /** Sets what its sealed windows came to. */
    void settled(int ofVariant, long firstAt, int sealedTrials, int sealedSuccesses, long lastTrialAt) {
        variant = ofVariant;
        first = firstAt;
        trials = sealedTrials;
        successes = sealedSuccesses;
        lastTrial = lastTrialAt;
    }

    /** Adds an event as it is. */
    void add(boolean click, int ofVariant, long at, long key, long name, int tie, int copiesKept, int segmentCode) {
        if (size == times.length) {
            grow();
        }
        clicks[size] = click;
        variants[size] = ofVariant;
        times[size] = at;
        keys[size] = key;
        names[size] = name;
        ties[size] = tie;
        copies[size] = copiesKept;
        segments[size] = segmentCode;
        size++;
    }

    private void grow() {
        int room = 2 * size;
        clicks = Arrays.copyOf(clicks, room);
        variants = Arrays.copyOf(variants, room);
        times = Arrays.copyOf(times, room);
        keys = Arrays.copyOf(keys, room);
        names = Arrays.copyOf(names, room);
        ties = Arrays.copyOf(ties, room);
        copies = Arrays.copyOf(copies, room);
        segments = Arrays.copyOf(segments, room);
    }

    private void remove(int event) {
        size--;
        clicks[event] = clicks[size];
        variants[event] = variants[size];
        times[event] = times[size];
        keys[event] = keys[size];
        names[event] = names[size];
        ties[event] = ties[size];
        copies[event] = copies[size];
        segments[event] = segments[size];
    }

    /** Position of a view by its key, or -1. */
    int view(long key) {
        for (int i = 0; i < size; i++) {
            if (!clicks[i] && keys[i] == key) {
                return i;
            }
        }
        return -1;
    }

    /** Takes a view once more. Should the copies differ, the earliest stands, so that their order does not matter. */
    void viewAgain(int event, int ofVariant, long at, int segmentCode) {
        copies[event]++;
        if (at < times[event] || (at == times[event] && ofVariant < variants[event])) {
            times[event] = at;
            variants[event] = ofVariant;
            segments[event] = segmentCode;
        }
    }

    /** Whether views of the unit have been sealed, which makes its first exposure and variant final. */
    boolean isFixed() {
        return trials > 0;
    }

    /** Whether there is nothing to be remembered. */
    boolean isEmpty() {
        return size == 0 && !isFixed();
    }

    boolean isFull() {
        return size == MOST_EVENTS;
    }

    /** Views and clicks kept here. */
    int size() {
        return size;
    }

    boolean isClick(int event) {
        return clicks[event];
    }

    int variant(int event) {
        return variants[event];
    }

    long time(int event) {
        return times[event];
    }

    /** Of a view what tells it from others, of a click the watermark of its source when it arrived. */
    long key(int event) {
        return keys[event];
    }

    /** Of a view what clicks call it, of a click the view it names. */
    long name(int event) {
        return names[event];
    }

    int tie(int event) {
        return ties[event];
    }

    /** Code of the segments of a view. */
    int segments(int event) {
        return segments[event];
    }

    int copies(int event) {
        return copies[event];
    }

    /** Events kept here whose outcome is not final yet. */
    int events() {
        int events = 0;
        for (int i = 0; i < size; i++) {
            events += copies[i];
        }
        return events;
    }

    int trials() {
        return trials;
    }

    int successes() {
        return successes;
    }

    /** Event time of the latest trial sealed. */
    long lastTrial() {
        return lastTrial;
    }

    /** Variant, once that is final. */
    int variant() {
        return variant;
    }

    /** Event time of the first exposure, once that is final. */
    long first() {
        return first;
    }

    /** Position of the earliest view kept here, ties as in counting by unit, or -1 when there is no view. */
    int earliestView() {
        int earliest = -1;
        for (int i = 0; i < size; i++) {
            if (!clicks[i] && (earliest < 0 || isEarlier(i, earliest))) {
                earliest = i;
            }
        }
        return earliest;
    }

    /** Whether one view comes before another: by time, then by the digest of its id, then by variant. */
    boolean isEarlier(int event, int other) {
        if (times[event] != times[other]) {
            return times[event] < times[other];
        }
        int byTie = Integer.compareUnsigned(ties[event], ties[other]);
        if (byTie != 0) {
            return byTie < 0;
        }
        return variants[event] != variants[other]
                ? variants[event] < variants[other]
                : Long.compareUnsigned(keys[event], keys[other]) < 0;
    }

    /** Adds what a window came to. */
    void settle(int moreTrials, int moreSuccesses, long lastTrialAt) {
        trials += moreTrials;
        successes += moreSuccesses;
        lastTrial = Math.max(lastTrial, lastTrialAt);
    }

    /** Fixes first exposure and variant; of the segments the caller takes note. */
    void fix(int event) {
        variant = variants[event];
        first = times[event];
        lastTrial = first;
    }

    /** Removes the events that are marked. */
    void removeMarked(boolean[] marks) {
        for (int i = size - 1; i >= 0; i--) {
            if (marks[i]) {
                remove(i);
            }
        }
    }

    /** Writes what its sealed windows came to. */
    void writeSettled(DataOutput out) throws IOException {
        VariableLength.write(out, trials);
        if (isFixed()) {
            VariableLength.write(out, successes);
            out.writeByte(variant);
            out.writeLong(first);
            out.writeLong(lastTrial);
        }
    }

    /** Takes over what {@link #writeSettled} wrote, and nothing open. */
    void readSettled(ChunkReader in) {
        clear();
        int sealedTrials = VariableLength.read(in);
        if (sealedTrials > 0) {
            int sealedSuccesses = VariableLength.read(in);
            int ofVariant = in.readByte();
            long firstAt = in.readLong();
            settled(ofVariant, firstAt, sealedTrials, sealedSuccesses, in.readLong());
        }
    }

    void write(DataOutput out) throws IOException {
        writeSettled(out);
        VariableLength.write(out, size);
        for (int i = 0; i < size; i++) {
            out.writeBoolean(clicks[i]);
            out.writeByte(variants[i]);
            out.writeLong(times[i]);
            out.writeLong(keys[i]);
            out.writeLong(names[i]);
            out.writeInt(ties[i]);
            VariableLength.write(out, copies[i]);
            VariableLength.write(out, segments[i]);
        }
    }

    /** Takes over what {@link #write} wrote. */
    void read(ChunkReader in) {
        readSettled(in);
        int stored = VariableLength.read(in);
        for (int i = 0; i < stored; i++) {
            boolean click = in.readByte() != 0;
            int ofVariant = in.readByte();
            long at = in.readLong();
            long key = in.readLong();
            long name = in.readLong();
            int tie = in.readInt();
            int copiesKept = VariableLength.read(in);
            add(click, ofVariant, at, key, name, tie, copiesKept, VariableLength.read(in));
        }
    }
}
