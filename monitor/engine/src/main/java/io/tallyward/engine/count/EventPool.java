package io.tallyward.engine.count;

import java.util.Arrays;

/**
 * Short lists of small facts about open units, many lists in few arrays: a fact takes 20 bytes, and places given back are
 * used again. A fact holds two numbers of 48 bits or less. Not thread-safe.
 */
final class EventPool {

    /** The empty list. */
    static final int NONE = -1;

    private static final int PAGE_BITS = 12;
    private static final int PAGE = 1 << PAGE_BITS;

    private long[][] first = new long[0][];
    private long[][] second = new long[0][];
    private int[][] next = new int[0][];
    private int used;
    private int held;
    private int free = NONE;

    /** Puts a fact before a list; returns the longer list. */
    int prepend(int list, long firstNumber, long secondNumber) {
        int place = free;
        if (place == NONE) {
            place = used++;
            if (place >> PAGE_BITS == first.length) {
                addPage();
            }
        } else {
            free = next(place);
        }
        held++;
        first[place >> PAGE_BITS][place & PAGE - 1] = firstNumber;
        second[place >> PAGE_BITS][place & PAGE - 1] = secondNumber;
        next[place >> PAGE_BITS][place & PAGE - 1] = list;
        return place;
    }

    private void addPage() {
        int pages = first.length;
        first = Arrays.copyOf(first, pages + 1);
        second = Arrays.copyOf(second, pages + 1);
        next = Arrays.copyOf(next, pages + 1);
        first[pages] = new long[PAGE];
        second[pages] = new long[PAGE];
        next[pages] = new int[PAGE];
    }

    /** First number of the fact a list begins with. */
    long first(int list) {
        return first[list >> PAGE_BITS][list & PAGE - 1];
    }

    /** Second number of it. */
    long second(int list) {
        return second[list >> PAGE_BITS][list & PAGE - 1];
    }

    /** The rest of a list. */
    int next(int list) {
        return next[list >> PAGE_BITS][list & PAGE - 1];
    }

    /** Gives the places of a list back; the memory too, once nothing is held any more. */
    void release(int list) {
        int place = list;
        while (place != NONE) {
            int following = next(place);
            next[place >> PAGE_BITS][place & PAGE - 1] = free;
            free = place;
            held--;
            place = following;
        }
        if (held == 0) {
            forgetAll();
        }
    }

    private void forgetAll() {
        if (used > PAGE) {
            first = new long[0][];
            second = new long[0][];
            next = new int[0][];
            used = 0;
            free = NONE;
        }
    }
}
