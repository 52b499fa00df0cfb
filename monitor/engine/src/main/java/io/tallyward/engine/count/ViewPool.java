package io.tallyward.engine.count;

import java.util.Arrays;

/**
 * Short lists of events of units that are counted by view, many lists in few arrays: an event takes 32 bytes, and places
 * given back are used again. Not thread-safe.
 */
final class ViewPool {

    /** The empty list. */
    static final int NONE = -1;

    private static final int PAGE_BITS = 11;
    private static final int PAGE = 1 << PAGE_BITS;

    private long[][] states = new long[0][];
    private long[][] keys = new long[0][];
    private long[][] names = new long[0][];
    private int[][] ties = new int[0][];
    private int[][] nexts = new int[0][];
    private int used;
    private int free = NONE;

    /** Puts an event before a list; returns the longer list. */
    int prepend(int list, long state, long key, long name, int tie) {
        int place = free;
        if (place == NONE) {
            place = used++;
            if (place >> PAGE_BITS == states.length) {
                addPage();
            }
        } else {
            free = next(place);
        }
        int page = place >> PAGE_BITS;
        int at = place & PAGE - 1;
        states[page][at] = state;
        keys[page][at] = key;
        names[page][at] = name;
        ties[page][at] = tie;
        nexts[page][at] = list;
        return place;
    }

    private void addPage() {
        int pages = states.length;
        states = Arrays.copyOf(states, pages + 1);
        keys = Arrays.copyOf(keys, pages + 1);
        names = Arrays.copyOf(names, pages + 1);
        ties = Arrays.copyOf(ties, pages + 1);
        nexts = Arrays.copyOf(nexts, pages + 1);
        states[pages] = new long[PAGE];
        keys[pages] = new long[PAGE];
        names[pages] = new long[PAGE];
        ties[pages] = new int[PAGE];
        nexts[pages] = new int[PAGE];
    }

    long state(int list) {
        return states[list >> PAGE_BITS][list & PAGE - 1];
    }

    long key(int list) {
        return keys[list >> PAGE_BITS][list & PAGE - 1];
    }

    long name(int list) {
        return names[list >> PAGE_BITS][list & PAGE - 1];
    }

    int tie(int list) {
        return ties[list >> PAGE_BITS][list & PAGE - 1];
    }

    /** The rest of a list. */
    int next(int list) {
        return nexts[list >> PAGE_BITS][list & PAGE - 1];
    }

    /** Gives the places of a list back. */
    void release(int list) {
        int place = list;
        while (place != NONE) {
            int following = next(place);
            nexts[place >> PAGE_BITS][place & PAGE - 1] = free;
            free = place;
            place = following;
        }
    }
}
