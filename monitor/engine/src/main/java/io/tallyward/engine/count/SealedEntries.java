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

    void add(long windowStart, int sequence) {
        int window = (int) ((windowStart - runFrom) / windowMillis);
        windows.set(window);
        if (sequence > 0) {
            several.merge(window, sequence, Math::max);
        }
    }

    /** Gives every entry, in order, and forgets them. */
    void takeAll(Entry taker) {
        windows.stream().forEach(window -> {
            for (int sequence = 0; sequence <= several.getOrDefault(window, 0); sequence++) {
                taker.take(runFrom + window * windowMillis, sequence);
            }
        });
        windows.clear();
        several.clear();
    }
}
