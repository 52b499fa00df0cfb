package io.tallyward.engine.count;

import java.util.Arrays;

/** Hashes in the order in which they were added, 16 bytes each. Not thread-safe. */
final class HashList {

    private long[] words = new long[16];
    private int size;

    void add(long high, long low) {
        if (2 * size == words.length) {
            words = Arrays.copyOf(words, 2 * words.length);
        }
        words[2 * size] = high;
        words[2 * size + 1] = low;
        size++;
    }

    int size() {
        return size;
    }

    long high(int index) {
        return words[2 * index];
    }

    long low(int index) {
        return words[2 * index + 1];
    }

    /** Forgets all; keeps room for as many again, unless that was unusually much. */
    void clear() {
        words = size < words.length / 8 ? new long[Math.max(16, words.length / 2)] : words;
        size = 0;
    }
}
