package io.tallyward.service.watch;

import io.tallyward.connector.kafka.KeyPartitions;
import java.util.Arrays;

/**
 * Tells whether a topic is keyed by unit, without which the events of one unit are spread over partitions and counted as
 * several units. An event agrees if its key is its unit, or if it lies where its unit as a key would have put it. Not
 * thread-safe.
 */
final class KeyCheck {

    /** Events per verdict. */
    private static final int SAMPLE = 500;

    /** After the first verdict only one event in so many is looked at. */
    private static final int STRIDE = 64;

    /** A larger share of disagreeing events than this means that the topic is keyed by something else. */
    private static final double TOLERATED = 0.1;

    private final int partition;
    private final int partitions;
    private int seen;
    private int sampled;
    private int disagreeing;
    private boolean judged;
    private boolean unkeyed;

    KeyCheck(int partition, int partitions) {
        this.partition = partition;
        this.partitions = partitions;
    }

    /**
     * Looks at an event; returns whether the verdict has just changed.
     *
     * @param unit begins with the unit in UTF-8
     * @param unitLength how many bytes of it belong to the unit
     */
    boolean observe(byte[] key, byte[] unit, int unitLength) {
        if (partitions == 1 || (judged && ++seen % STRIDE != 0)) {
            return false;
        }
        byte[] expected = Arrays.copyOf(unit, unitLength);
        boolean agrees = Arrays.equals(key, expected) || KeyPartitions.partitionOf(expected, partitions) == partition;
        sampled++;
        disagreeing += agrees ? 0 : 1;
        if (sampled < SAMPLE) {
            return false;
        }
        boolean before = unkeyed;
        unkeyed = disagreeing > TOLERATED * sampled;
        judged = true;
        sampled = 0;
        disagreeing = 0;
        return unkeyed != before;
    }

    /** Whether the topic was last found to be keyed by something other than the unit. */
    boolean unkeyed() {
        return unkeyed;
    }
}
