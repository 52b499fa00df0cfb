package io.tallyward.demo.bench;

import java.util.Arrays;

/**
 * When which number of a partition's events was first seen to be counted. Since a partition is counted in its order, the
 * event number n (from 0) is visible from the first sighting of a count above n. Not thread-safe.
 */
final class Sightings {

    private long[] nanos = new long[1024];
    private long[] counts = new long[1024];
    private int size;

    /** Tells what was seen at a moment; only a count above all before it matters. */
    void saw(long atNanos, long count) {
        if (count <= highest()) {
            return;
        }
        if (size == nanos.length) {
            nanos = Arrays.copyOf(nanos, 2 * size);
            counts = Arrays.copyOf(counts, 2 * size);
        }
        nanos[size] = atNanos;
        counts[size++] = count;
    }

    /** The highest count seen; 0 before the first. */
    long highest() {
        return size == 0 ? 0 : counts[size - 1];
    }

    /**
     * How long each event took from being sent to being visible.
     *
     * @param sentNanos when the events were sent, in the order of the partition
     * @param fromNanos events sent earlier are left out
     * @return nanoseconds, in the order of the events
     * @throws IllegalStateException when more events were seen than sent, or one that was sent was never seen
     */
    long[] latencies(long[] sentNanos, long fromNanos) {
        if (highest() != sentNanos.length) {
            throw new IllegalStateException(
                    "events counted: " + highest() + " (expected: the " + sentNanos.length + " that were sent)");
        }
        long[] latencies = new long[sentNanos.length];
        int kept = 0;
        int sighting = 0;
        for (int event = 0; event < sentNanos.length; event++) {
            while (counts[sighting] <= event) {
                sighting++;
            }
            if (sentNanos[event] - fromNanos >= 0) {
                latencies[kept++] = nanos[sighting] - sentNanos[event];
            }
        }
        return Arrays.copyOf(latencies, kept);
    }

    /**
     * The smallest value that is not exceeded by a share of all values: the nearest rank.
     *
     * @param ascending values in ascending order, at least one
     * @param share above 0, at most 1
     */
    static long quantile(long[] ascending, double share) {
        if (!(share > 0 && share <= 1) || ascending.length == 0) {
            throw new IllegalArgumentException("share: " + share + " of " + ascending.length
                    + " values (expected: above 0 to 1, of at least one value)");
        }
        return ascending[(int) Math.ceil(share * ascending.length) - 1];
    }
}
