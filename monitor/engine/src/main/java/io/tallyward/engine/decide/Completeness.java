package io.tallyward.engine.decide;

import io.tallyward.engine.count.OutcomeCounts;
import io.tallyward.engine.count.PartitionsChangedException;
import io.tallyward.engine.count.SealCause;
import io.tallyward.engine.count.TallyUpdate;
import io.tallyward.engine.count.WindowTally;
import io.tallyward.engine.count.WindowTally.Cell;
import io.tallyward.engine.count.WindowTally.SegmentCell;
import java.io.DataInput;
import java.io.DataOutput;
import java.io.IOException;
import java.util.ArrayList;
import java.util.Arrays;
import java.util.LinkedHashMap;
import java.util.List;
import java.util.Map;
import java.util.NavigableMap;
import java.util.Optional;
import java.util.Set;
import java.util.TreeMap;
import java.util.TreeSet;

/**
 * Which windows of an experiment are complete: those that every input partition has sealed. Until then the parts of a
 * window that are already sealed wait here. Windows leave in order, each exactly once, whatever the order in which the
 * partitions report.
 *
 * <p>Its durable form is one short entry, and one or more for every window that waits: while one partition lags, thousands of
 * windows of the others may wait, more than one record can hold; and the segments of one window, each partition naming
 * values of its own, may be more than one record can hold too.
 */
final class Completeness {

    /** An entry is closed once it is about this large; well below a broker's usual record limit of 1 MB. */
    static final int PIECE_BYTES = 400_000;

    /** Of a segment's cell beside its texts: their lengths, epoch, variant and units. */
    private static final int BYTES_OF_SEGMENT = 20;

    /** Bytes of a character in a stored text, at most. */
    private static final int MOST_UTF = 3;

    private final long runFrom;
    private long[] sealedUntil = new long[0];

    /** Stretches that some partition sealed because it was idle, by their start; disjoint, not yet complete. */
    private final TreeMap<Long, Long> idle = new TreeMap<>();

    private final TreeMap<Long, Parts> waiting = new TreeMap<>();

    /** What was restored of windows and not put together yet, by window and number. */
    private final TreeMap<Long, TreeMap<Integer, Parts>> restored = new TreeMap<>();

    /** How many entries windows have in the log, where they have any. */
    private final TreeMap<Long, Integer> stored = new TreeMap<>();

    /** Windows whose entries in the log, if any, are out of date. */
    private final Set<Long> touched = new TreeSet<>();

    Completeness(long runFrom) {
        this.runFrom = runFrom;
    }

    /**
     * The merged counts of one window.
     *
     * @param cells counts from all partitions, each cell once
     * @param segments units by segment from all partitions, each segment, epoch and variant once
     * @param outcomes outcomes from all partitions
     */
    record Parts(List<Cell> cells, List<SegmentCell> segments, OutcomeCounts outcomes) {

        static final Parts NONE = new Parts(List.of(), List.of(), OutcomeCounts.NONE);

        Parts plus(WindowTally tally) {
            List<Cell> merged = new ArrayList<>(cells);
            tally.cells().forEach(cell -> add(merged, cell));
            return new Parts(merged, mergedSegments(tally), outcomes.plus(tally.outcomes()));
        }

        /** These and others of the same window that have no cell or segment in common with them. */
        private Parts beside(Parts others) {
            List<Cell> allCells = new ArrayList<>(cells);
            allCells.addAll(others.cells);
            List<SegmentCell> allSegments = new ArrayList<>(segments);
            allSegments.addAll(others.segments);
            return new Parts(allCells, allSegments, outcomes.plus(others.outcomes));
        }

        /** The same in pieces, each small enough for one record; put beside one another they are the whole. */
        private List<Parts> pieces() {
            List<Parts> pieces = new ArrayList<>();
            int from = 0;
            int bytes = 0;
            for (int i = 0; i < segments.size(); i++) {
                bytes += bytes(segments.get(i));
                if (bytes > PIECE_BYTES) {
                    pieces.add(piece(pieces.isEmpty(), from, i));
                    from = i;
                    bytes = bytes(segments.get(i));
                }
            }
            pieces.add(piece(pieces.isEmpty(), from, segments.size()));
            return pieces;
        }

        private Parts piece(boolean first, int from, int to) {
            List<SegmentCell> its = segments.subList(from, to);
            return first ? new Parts(cells, its, outcomes) : new Parts(List.of(), its, OutcomeCounts.NONE);
        }

        private static int bytes(SegmentCell cell) {
            return BYTES_OF_SEGMENT
                    + MOST_UTF * (cell.field().length() + cell.value().length());
        }

        private List<SegmentCell> mergedSegments(WindowTally tally) {
            if (segments.isEmpty() || tally.segments().isEmpty()) {
                return segments.isEmpty() ? tally.segments() : segments;
            }
            Map<Segment, Long> units = new LinkedHashMap<>();
            segments.forEach(cell -> units.merge(Segment.of(cell), cell.units(), Long::sum));
            tally.segments().forEach(cell -> units.merge(Segment.of(cell), cell.units(), Long::sum));
            List<SegmentCell> merged = new ArrayList<>();
            units.forEach((place, sum) ->
                    merged.add(new SegmentCell(place.field, place.value, place.epoch, place.variant, sum)));
            return merged;
        }

        private record Segment(String field, String value, int epoch, int variant) {

            static Segment of(SegmentCell cell) {
                return new Segment(cell.field(), cell.value(), cell.epoch(), cell.variant());
            }
        }

        private static void add(List<Cell> cells, Cell cell) {
            for (int i = 0; i < cells.size(); i++) {
                Cell present = cells.get(i);
                if (present.epoch() == cell.epoch() && present.variant() == cell.variant()) {
                    cells.set(i, present.plus(cell));
                    return;
                }
            }
            cells.add(cell);
        }

        void write(DataOutput out) throws IOException {
            outcomes.write(out);
            out.writeInt(cells.size());
            for (Cell cell : cells) {
                out.writeInt(cell.epoch());
                out.writeInt(cell.variant());
                out.writeLong(cell.units());
                out.writeLong(cell.trials());
                out.writeLong(cell.successes());
                out.writeLong(cell.trialSquares());
                out.writeLong(cell.products());
                out.writeLong(cell.successSquares());
            }
            out.writeInt(segments.size());
            for (SegmentCell cell : segments) {
                out.writeUTF(cell.field());
                out.writeUTF(cell.value());
                out.writeInt(cell.epoch());
                out.writeInt(cell.variant());
                out.writeLong(cell.units());
            }
        }

        static Parts read(DataInput in) throws IOException {
            OutcomeCounts outcomes = OutcomeCounts.read(in);
            List<Cell> cells = new ArrayList<>();
            for (int rest = in.readInt(); rest > 0; rest--) {
                cells.add(new Cell(
                        in.readInt(),
                        in.readInt(),
                        in.readLong(),
                        in.readLong(),
                        in.readLong(),
                        in.readLong(),
                        in.readLong(),
                        in.readLong()));
            }
            List<SegmentCell> segments = new ArrayList<>();
            for (int rest = in.readInt(); rest > 0; rest--) {
                segments.add(new SegmentCell(in.readUTF(), in.readUTF(), in.readInt(), in.readInt(), in.readLong()));
            }
            return new Parts(cells, segments, outcomes);
        }
    }

    /**
     * Takes note of what one partition has sealed.
     *
     * @throws PartitionsChangedException when the input topics have not as many partitions as before
     */
    void add(TallyUpdate update) {
        if (sealedUntil.length == 0) {
            sealedUntil = new long[update.partitions()];
            Arrays.fill(sealedUntil, runFrom);
        } else if (sealedUntil.length != update.partitions()) {
            throw new PartitionsChangedException(sealedUntil.length, update.partitions());
        }
        long before = sealedUntil[update.partition()];
        for (WindowTally window : update.windows()) {
            if (window.startMillis() >= before) {
                putTogether(window.startMillis());
                Parts present = waiting.getOrDefault(window.startMillis(), Parts.NONE);
                waiting.put(window.startMillis(), present.plus(window));
                touched.add(window.startMillis());
            }
        }
        if (update.sealedUntilMillis() > before) {
            if (update.cause() == SealCause.IDLE) {
                addIdle(before, update.sealedUntilMillis());
            }
            sealedUntil[update.partition()] = update.sealedUntilMillis();
        }
    }

    private void addIdle(long from, long until) {
        // What is complete has been taken by now: the caller takes windows as soon as they are.
        long complete = completeUntil();
        idle.values().removeIf(end -> end <= complete);
        Map.Entry<Long, Long> earlier = idle.floorEntry(from);
        long start = earlier != null && earlier.getValue() >= from ? earlier.getKey() : from;
        NavigableMap<Long, Long> met = idle.subMap(start, true, until, true);
        long end = met.values().stream().reduce(until, Math::max);
        met.clear();
        idle.put(start, end);
    }

    /** Whether no partition has reported yet. */
    boolean isUntouched() {
        return sealedUntil.length == 0;
    }

    /** Every window that ends at or before this moment is complete. */
    long completeUntil() {
        return Arrays.stream(sealedUntil).min().orElse(runFrom);
    }

    /** Whether some partition sealed a window because it was idle, with or without anything in it. */
    boolean sealedIdle(long windowStart) {
        Map.Entry<Long, Long> stretch = idle.floorEntry(windowStart);
        return stretch != null && stretch.getValue() > windowStart;
    }

    /** Takes the merged counts of a complete window. */
    Parts take(long windowStart) {
        putTogether(windowStart);
        Parts parts = waiting.remove(windowStart);
        if (parts == null) {
            return Parts.NONE;
        }
        touched.add(windowStart);
        return parts;
    }

    private void putTogether(long windowStart) {
        TreeMap<Integer, Parts> pieces = restored.remove(windowStart);
        if (pieces != null) {
            waiting.put(windowStart, pieces.values().stream().reduce(Parts.NONE, Parts::beside));
        }
    }

    /**
     * An entry of a window in the log.
     *
     * @param windowStart start of the window
     * @param number which of the window's entries it is, from 0
     * @param parts what it holds; empty where it is to be removed
     */
    record Entry(long windowStart, int number, Optional<Parts> parts) {}

    /** The entries that changed since this was last asked. */
    List<Entry> takeChanged() {
        List<Entry> changes = new ArrayList<>();
        for (long window : touched) {
            Parts parts = waiting.get(window);
            List<Parts> pieces = parts == null ? List.of() : parts.pieces();
            for (int number = 0; number < pieces.size(); number++) {
                changes.add(new Entry(window, number, Optional.of(pieces.get(number))));
            }
            int before = stored.getOrDefault(window, 0);
            for (int number = pieces.size(); number < before; number++) {
                changes.add(new Entry(window, number, Optional.empty()));
            }
            if (pieces.isEmpty()) {
                stored.remove(window);
            } else {
                stored.put(window, pieces.size());
            }
        }
        touched.clear();
        return changes;
    }

    /** Restores an entry of a window as it was written, or its removal. */
    void restore(Entry entry) {
        long window = entry.windowStart();
        TreeMap<Integer, Parts> pieces = restored.computeIfAbsent(window, start -> new TreeMap<>());
        entry.parts().ifPresentOrElse(parts -> pieces.put(entry.number(), parts), () -> pieces.remove(entry.number()));
        if (pieces.isEmpty()) {
            restored.remove(window);
            stored.remove(window);
        } else {
            stored.put(window, pieces.lastKey() + 1);
        }
    }

    /** Writes all but the windows. */
    void write(DataOutput out) throws IOException {
        out.writeInt(sealedUntil.length);
        for (long moment : sealedUntil) {
            out.writeLong(moment);
        }
        out.writeInt(idle.size());
        for (Map.Entry<Long, Long> stretch : idle.entrySet()) {
            out.writeLong(stretch.getKey());
            out.writeLong(stretch.getValue());
        }
    }

    void read(DataInput in) throws IOException {
        sealedUntil = new long[in.readInt()];
        for (int partition = 0; partition < sealedUntil.length; partition++) {
            sealedUntil[partition] = in.readLong();
        }
        idle.clear();
        for (int stretches = in.readInt(); stretches > 0; stretches--) {
            idle.put(in.readLong(), in.readLong());
        }
    }
}
