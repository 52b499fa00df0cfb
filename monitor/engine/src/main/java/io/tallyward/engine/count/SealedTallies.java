package io.tallyward.engine.count;

import io.tallyward.engine.count.WindowTally.SegmentCell;
import java.util.ArrayList;
import java.util.LinkedHashMap;
import java.util.List;
import java.util.Map;

/** Collects what was sealed since the last commit into as few updates as the causes of sealing and a size bound allow. */
final class SealedTallies {

    /**
     * Bytes of the windows of one update, as its form takes them at most: well below a broker's usual limit of 1 MB. A single
     * window is never parted; its counts belong to one allocation epoch, so that it stays below 700 kB whatever its segments.
     */
    private static final int BYTES_PER_UPDATE = 300_000;

    /** Names of members, times, outcomes; of a cell or segment, names of members and counts. */
    private static final int BYTES_OF_WINDOW = 400;

    private static final int BYTES_OF_CELL = 250;
    private static final int BYTES_OF_SEGMENT = 90;

    /** A character that has to be escaped. */
    private static final int BYTES_OF_CHARACTER = 6;

    private final int partition;
    private final int partitions;
    private final Map<String, Pending> pending = new LinkedHashMap<>();
    private final List<TallyUpdate> closed = new ArrayList<>();

    SealedTallies(int partition, int partitions) {
        this.partition = partition;
        this.partitions = partitions;
    }

    private static final class Pending {
        private final SealCause cause;
        private final List<WindowTally> windows = new ArrayList<>();
        private long sealedUntil;
        private int bytes;

        private Pending(SealCause cause) {
            this.cause = cause;
        }
    }

    void add(ExperimentCounter counter, SealCause cause, List<ExperimentCounter.Sealed> windows) {
        String experiment = counter.plan().experiment();
        Pending current = pending.get(experiment);
        if (current != null && current.cause != cause) {
            close(counter, current);
            current = null;
        }
        if (current == null) {
            current = new Pending(cause);
            pending.put(experiment, current);
        }
        long windowMillis = counter.plan().count().window().toMillis();
        for (ExperimentCounter.Sealed window : windows) {
            int bytes = bytes(window.tally());
            if (!current.windows.isEmpty() && current.bytes + bytes > BYTES_PER_UPDATE) {
                close(counter, current);
                current.windows.clear();
                current.bytes = 0;
            }
            current.bytes += bytes;
            current.windows.add(window.tally());
            current.sealedUntil = window.tally().startMillis() + windowMillis;
        }
        current.sealedUntil = counter.sealedUntil();
    }

    private static int bytes(WindowTally window) {
        int bytes = BYTES_OF_WINDOW + BYTES_OF_CELL * window.cells().size();
        for (SegmentCell cell : window.segments()) {
            bytes += BYTES_OF_SEGMENT + cell.field().length() + bytes(cell.value());
        }
        return bytes;
    }

    private static int bytes(String text) {
        int bytes = 0;
        for (int i = 0; i < text.length(); i++) {
            char c = text.charAt(i);
            bytes += c >= ' ' && c < 0x7f ? 1 : BYTES_OF_CHARACTER;
        }
        return bytes;
    }

    private void close(ExperimentCounter counter, Pending update) {
        closed.add(update(counter.plan().experiment(), counter.planDigest(), update));
    }

    private TallyUpdate update(String experiment, String planDigest, Pending update) {
        return new TallyUpdate(
                experiment, planDigest, partition, partitions, update.sealedUntil, update.cause, update.windows);
    }

    List<TallyUpdate> take(Map<String, ExperimentCounter> counters) {
        pending.forEach((experiment, update) ->
                closed.add(update(experiment, counters.get(experiment).planDigest(), update)));
        pending.clear();
        List<TallyUpdate> result = new ArrayList<>(closed);
        closed.clear();
        return result;
    }
}
