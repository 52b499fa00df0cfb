package io.tallyward.engine.count;

import java.util.BitSet;
import java.util.TreeMap;

/** Which windows of an experiment have entries in the log for the units sealed with them: a bit for each, as nearly all have one. */
final class SealedEntries {

    private final long runFrom;
    private final long windowMillis;
    private final BitSet windows = new BitSet();
    private final TreeMap<Integer, Integer> several = new TreeMap<>();

    SealedEntries(long runFrom, long windowMillis) {
        this.runFrom = runFrom;
        this.windowMillis = windowMillis;
    }

    /** Takes an entry of a window. */
    @FunctionalInterface
    interface Entry {
        /** @param sequence number of the entry within its window, from 0 */
        void take(long windowStart, int sequence);
    }

    /** Takes note of an entry; one from before the run was written under another plan, which others refuse. */
    void add(long windowStart, int sequence) {
        if (windowStart < runFrom) {
            return;
        }
        int window = (int) ((windowStart - runFrom) / windowMillis);
        windows.set(window);
        if (sequence > 0) {
            several.merge(window, sequence, Math::max);
        }
    }

    boolean isEmpty() {
        return windows.isEmpty();
    }

    /** Forgets the entries of a window: they were removed. */
    void remove(long windowStart) {
        if (windowStart >= runFrom) {
            int window = (int) ((windowStart - runFrom) / windowMillis);
            windows.clear(window);
            several.remove(window);
        }
    }

    /** Gives the entries of some windows, in order, and forgets them. */
    void take(int mostWindows, Entry taker) {
        int window = windows.nextSetBit(0);
        for (int taken = 0; taken < mostWindows && window >= 0; taken++) {
            long start = runFrom + window * windowMillis;
            for (int sequence = 0; sequence <= several.getOrDefault(window, 0); sequence++) {
                taker.take(start, sequence);
            }
            windows.clear(window);
            several.remove(window);
            window = windows.nextSetBit(window);
        }
    }
}
