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
 * <p>Its durable form is one short entry, and one for every window that waits: while one partition lags, thousands of
 * windows of the others may wait, more than one record can hold.
 */
final class Completeness {

    private final long runFrom;
    private long[] sealedUntil = new long[0];

    /** Stretches that some partition sealed because it was idle, by their start; disjoint, not yet complete. */
    private final TreeMap<Long, Long> idle = new TreeMap<>();

    private final TreeMap<Long, Parts> waiting = new TreeMap<>();

    /** Windows that have an entry in the log. */
    private final Set<Long> stored = new TreeSet<>();

    /** Windows whose entry in the log, if any, is out of date. */
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
        Parts parts = waiting.remove(windowStart);
        if (parts == null) {
            return Parts.NONE;
        }
        touched.add(windowStart);
        return parts;
    }

    /** The windows whose entries changed since this was last asked, by start; empty where the entry is to be removed. */
    Map<Long, Optional<Parts>> takeChanged() {
        Map<Long, Optional<Parts>> changes = new TreeMap<>();
        for (long window : touched) {
            Optional<Parts> parts = Optional.ofNullable(waiting.get(window));
            boolean wasStored = parts.isPresent() ? !stored.add(window) : stored.remove(window);
            if (parts.isPresent() || wasStored) {
                changes.put(window, parts);
            }
        }
        touched.clear();
        return changes;
    }

    /** Restores the entry of a window as it was written, or its removal. */
    void restore(long windowStart, Optional<Parts> parts) {
        if (parts.isPresent()) {
            waiting.put(windowStart, parts.get());
            stored.add(windowStart);
        } else {
            waiting.remove(windowStart);
            stored.remove(windowStart);
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
