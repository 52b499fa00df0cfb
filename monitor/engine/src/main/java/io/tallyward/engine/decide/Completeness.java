package io.tallyward.engine.decide;

import io.tallyward.engine.count.OutcomeCounts;
import io.tallyward.engine.count.PartitionsChangedException;
import io.tallyward.engine.count.SealCause;
import io.tallyward.engine.count.TallyUpdate;
import io.tallyward.engine.count.WindowTally;
import io.tallyward.engine.count.WindowTally.Cell;
import java.io.DataInput;
import java.io.DataOutput;
import java.io.IOException;
import java.util.ArrayList;
import java.util.Arrays;
import java.util.List;
import java.util.Map;
import java.util.TreeMap;

/**
 * Which windows of an experiment are complete: those that every input partition has sealed. Until then the parts of a
 * window that are already sealed wait here. Windows leave in order, each exactly once, whatever the order in which the
 * partitions report.
 */
final class Completeness {

    private final long runFrom;
    private long[] sealedUntil = new long[0];
    private final TreeMap<Long, Parts> waiting = new TreeMap<>();

    Completeness(long runFrom) {
        this.runFrom = runFrom;
    }

    /**
     * The merged counts of one window.
     *
     * @param cells counts from all partitions; the same cell may occur more than once
     * @param outcomes outcomes from all partitions
     * @param idle whether some partition sealed it because it was idle
     */
    record Parts(List<Cell> cells, OutcomeCounts outcomes, boolean idle) {

        static final Parts NONE = new Parts(List.of(), OutcomeCounts.NONE, false);

        Parts plus(WindowTally tally, SealCause cause) {
            List<Cell> merged = new ArrayList<>(cells);
            merged.addAll(tally.cells());
            return new Parts(merged, outcomes.plus(tally.outcomes()), idle || cause == SealCause.IDLE);
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
                waiting.merge(
                        window.startMillis(),
                        Parts.NONE.plus(window, update.cause()),
                        (present, added) -> present.plus(window, update.cause()));
            }
        }
        sealedUntil[update.partition()] = Math.max(before, update.sealedUntilMillis());
    }

    /** Every window that ends at or before this moment is complete. */
    long completeUntil() {
        return Arrays.stream(sealedUntil).min().orElse(runFrom);
    }

    /** Takes the merged counts of a complete window. */
    Parts take(long windowStart) {
        Parts parts = waiting.remove(windowStart);
        return parts == null ? Parts.NONE : parts;
    }

    void write(DataOutput out) throws IOException {
        out.writeInt(sealedUntil.length);
        for (long moment : sealedUntil) {
            out.writeLong(moment);
        }
        out.writeInt(waiting.size());
        for (Map.Entry<Long, Parts> window : waiting.entrySet()) {
            out.writeLong(window.getKey());
            out.writeBoolean(window.getValue().idle());
            window.getValue().outcomes().write(out);
            out.writeInt(window.getValue().cells().size());
            for (Cell cell : window.getValue().cells()) {
                out.writeInt(cell.epoch());
                out.writeInt(cell.variant());
                out.writeLong(cell.trials());
                out.writeLong(cell.successes());
            }
        }
    }

    void read(DataInput in) throws IOException {
        sealedUntil = new long[in.readInt()];
        for (int partition = 0; partition < sealedUntil.length; partition++) {
            sealedUntil[partition] = in.readLong();
        }
        waiting.clear();
        for (int windows = in.readInt(); windows > 0; windows--) {
            long start = in.readLong();
            boolean idle = in.readBoolean();
            OutcomeCounts outcomes = OutcomeCounts.read(in);
            List<Cell> cells = new ArrayList<>();
            for (int rest = in.readInt(); rest > 0; rest--) {
                cells.add(new Cell(in.readInt(), in.readInt(), in.readLong(), in.readLong()));
            }
            waiting.put(start, new Parts(cells, outcomes, idle));
        }
    }
}
