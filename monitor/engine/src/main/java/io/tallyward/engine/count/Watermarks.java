package io.tallyward.engine.count;

import java.io.DataInput;
import java.io.DataOutput;
import java.io.IOException;
import java.util.Arrays;
import java.util.List;
import java.util.Map;
import java.util.Set;
import java.util.TreeMap;
import java.util.TreeSet;

/**
 * How far event time has come in each source of a shard, a source being one input topic's partition. A source's watermark
 * is the latest event time admitted from it inside a run. While a source is idle, the wall clock less the idle time stands
 * in for its watermark. The shard as a whole has come as far as its slowest source.
 *
 * <p>Sources are remembered by their names, also those that are read no longer, so that adding a topic or taking one away
 * mixes nothing up.
 */
final class Watermarks {

    /** The watermark of a source from which nothing was admitted yet. */
    static final long NONE = Long.MIN_VALUE;

    private final List<String> sources;
    private final long idleAfterMillis;
    private final long[] seen;
    private final long[] assumed;
    private final long[] quietSince;

    /** Sources that were read earlier, with what was seen and assumed of them. */
    private final TreeMap<String, long[]> former = new TreeMap<>();

    /** Sources that the durable form names; empty while there is none. */
    private final Set<String> durable = new TreeSet<>();

    /** @param sources names of the sources, by index */
    Watermarks(List<String> sources, long idleAfterMillis) {
        this.sources = List.copyOf(sources);
        this.idleAfterMillis = idleAfterMillis;
        seen = filled(sources.size());
        assumed = filled(sources.size());
        quietSince = filled(sources.size());
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

    /** The latest event time of any source. */
    long latest() {
        return Arrays.stream(seen).max().orElse(NONE);
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

    /** Whether the durable form may hold anything of a source; true where there is none. */
    boolean hasRead(String source) {
        return durable.isEmpty() || durable.contains(source);
    }

    /** Whether there are sources that the durable form does not name. */
    boolean haveNewSources() {
        return !sources.stream().allMatch(this::hasRead);
    }

    /** Writes the durable form. */
    void write(DataOutput out) throws IOException {
        durable.addAll(sources);
        out.writeInt(sources.size() + former.size());
        for (int source = 0; source < sources.size(); source++) {
            write(out, sources.get(source), seen[source], assumed[source]);
        }
        for (Map.Entry<String, long[]> source : former.entrySet()) {
            write(out, source.getKey(), source.getValue()[0], source.getValue()[1]);
        }
    }

    private static void write(DataOutput out, String name, long seen, long assumed) throws IOException {
        out.writeUTF(name);
        out.writeLong(seen);
        out.writeLong(assumed);
    }

    /** Takes over what {@link #write} wrote. */
    void read(DataInput in) throws IOException {
        for (int rest = in.readInt(); rest > 0; rest--) {
            String name = in.readUTF();
            long storedSeen = in.readLong();
            long storedAssumed = in.readLong();
            int source = sources.indexOf(name);
            if (source < 0) {
                former.put(name, new long[] {storedSeen, storedAssumed});
            } else {
                seen[source] = storedSeen;
                assumed[source] = storedAssumed;
            }
            durable.add(name);
        }
    }
}
