package io.tallyward.demo.bench;

import java.util.Arrays;

/** When each record of a partition was handed to the producer, in the order of the partition. Thread-safe. */
final class SentTimes {

    private long[] nanos = new long[1024];
    private int size;

    /** Adds the next record of the partition. */
    synchronized void add(long sentNanos) {
        if (size == nanos.length) {
            nanos = Arrays.copyOf(nanos, 2 * size);
        }
        nanos[size++] = sentNanos;
    }

    /** The moments so far, as {@link System#nanoTime}. */
    synchronized long[] toArray() {
        return Arrays.copyOf(nanos, size);
    }

    /** How many records were handed over no later than at a moment; those after it come at the end. */
    synchronized int countUntil(long momentNanos) {
        int count = size;
        while (count > 0 && nanos[count - 1] - momentNanos > 0) {
            count--;
        }
        return count;
    }
}
