package io.tallyward.engine.count;

import java.util.Arrays;

/** The first 32 bits of hashes, in the order in which they were added, 4 bytes each. Not thread-safe. */
final class PrefixList {

    private int[] prefixes = new int[4];
    private int size;

    void add(long high) {
        if (size == prefixes.length) {
            prefixes = Arrays.copyOf(prefixes, size + Math.max(4, size / 4));
        }
        prefixes[size++] = (int) (high >>> 32);
    }

    int size() {
        return size;
    }

    int get(int index) {
        return prefixes[index];
    }
}
