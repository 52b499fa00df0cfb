package io.tallyward.engine.count;

import java.io.DataInput;
import java.io.DataOutput;
import java.io.IOException;
import java.util.Arrays;

/**
 * How far event time has come in each source of a shard, a source being one input topic's partition. A source's watermark
 * is the latest event time admitted from it inside a run. While a source is idle, the wall clock less the idle time stands
 * in for its watermark. The shard as a whole has come as far as its slowest source.
 */
final class Watermarks {

    /** The watermark of a source from which nothing was admitted yet. */
    static final long NONE = Long.MIN_VALUE;

    private final long idleAfterMillis;
    private final long[] seen;
    private final long[] assumed;
    private final long[] quietSince;

    Watermarks(int sources, long idleAfterMillis) {
        this.idleAfterMillis = idleAfterMillis;
        seen = filled(sources);
        assumed = filled(sources);
        quietSince = filled(sources);
    }

    private static long[] filled(int length) {
        long[] values = new long[length];
        Arrays.fill(values, NONE);
        return values;
    }

    /** How far one source has come, by its own events or by the clock that stands in for them. */
    long of(int source) {
        return Math.max(seen[source], assumed[source]);
    }

    /** How far all sources have come. */
    long slowest() {
        long slowest = Long.MAX_VALUE;
        for (int source = 0; source < seen.length; source++) {
            slowest = Math.min(slowest, of(source));
        }
        return slowest;
    }

    /** Whether the slowest source has come this far only because the clock stood in for it. */
    boolean slowestIsAssumed() {
        long slowest = slowest();
        for (int source = 0; source < seen.length; source++) {
            if (of(source) == slowest && seen[source] < slowest) {
                return true;
            }
        }
        return false;
    }

    /** Takes note of an admitted event; returns whether the source's watermark moved. */
    boolean advance(int source, long atMillis) {
        if (atMillis <= seen[source]) {
            return false;
        }
        seen[source] = atMillis;
        quietSince[source] = NONE;
        return true;
    }

    /**
     * Takes note of the wall clock. A source that did not advance for the idle time, and was seen to have been read to its
     * end from the beginning of that time on, is idle. Returns whether a stand-in watermark moved.
     */
    boolean passTime(int source, long nowMillis, boolean caughtUp) {
        if (!caughtUp) {
            quietSince[source] = NONE;
            return false;
        }
        if (quietSince[source] == NONE) {
            quietSince[source] = nowMillis;
            return false;
        }
        long standIn = nowMillis - idleAfterMillis;
        if (quietSince[source] > standIn || standIn <= of(source)) {
            return false;
        }
        assumed[source] = standIn;
        return true;
    }

    void write(DataOutput out) throws IOException {
        out.writeInt(seen.length);
        for (int source = 0; source < seen.length; source++) {
            out.writeLong(seen[source]);
            out.writeLong(assumed[source]);
        }
    }

    void read(DataInput in) throws IOException {
        int stored = in.readInt();
        for (int source = 0; source < stored; source++) {
            long storedSeen = in.readLong();
            long storedAssumed = in.readLong();
            if (source < seen.length) {
                seen[source] = storedSeen;
                assumed[source] = storedAssumed;
            }
        }
    }
}
