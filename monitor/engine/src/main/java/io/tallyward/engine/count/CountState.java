package io.tallyward.engine.count;

import static io.tallyward.engine.shard.Packing.pack;

import io.tallyward.engine.event.RejectReason;
import io.tallyward.engine.plan.PlanChangedException;
import io.tallyward.engine.shard.StateChange;
import java.io.ByteArrayInputStream;
import java.io.DataInputStream;
import java.io.IOException;
import java.io.UncheckedIOException;
import java.util.ArrayList;
import java.util.HashMap;
import java.util.List;
import java.util.Map;
import java.util.Set;
import java.util.TreeMap;
import java.util.TreeSet;

/**
 * The durable form of a COUNT shard. Five kinds of entry, told apart by the first byte of the key:
 *
 * <ul>
 *   <li>shard: what must not change (partitions, key of the unit hash), watermarks by input topic and reject counts, one
 *       entry, rewritten;
 *   <li>experiment: how far it is sealed and its outcomes, one entry each, rewritten;
 *   <li>segments: combinations of segment values that were new in one commit, written once, before the units that refer to
 *       them; and the values that are told, one entry, rewritten;
 *   <li>open units: those that changed in one commit, packed by the window in which they fall due; a later entry holds the
 *       later version of a unit;
 *   <li>sealed units: those of one window, packed; when a window is sealed, its open entries are removed, and when an
 *       experiment is archived, all of its units are.
 * </ul>
 *
 * So the log compacts to one packed entry per sealed window and a bounded number of open ones.
 */
final class CountState {

    private static final byte SHARD = 'w';
    private static final byte EXPERIMENT = 'k';
    private static final byte SEGMENTS = 'g';
    private static final byte OPEN = 'o';
    private static final byte SEALED = 's';
    private static final String KINDS = "wkgos";

    /** A packed entry is closed once it is this large; well below a broker's usual record limit of 1 MB. */
    static final int PACKED_BYTES = 400_000;

    /** Windows of an archived experiment that are removed in one commit. */
    static final int FORGOTTEN_AT_ONCE = 10_000;

    private final int partitions;
    private final long keyFingerprint;
    private final Map<String, TreeMap<Long, Integer>> openEntries = new HashMap<>();
    private final Map<String, SealedEntries> sealedEntries = new HashMap<>();
    /** Experiments whose entries were left alone, as no plan was known. */
    private final Set<String> unplanned = new TreeSet<>();

    private final Map<String, Foreseen> foreseen = new HashMap<>();

    /** Where an experiment is known to have come to by the end of the log. */
    private record Foreseen(long sealedUntil, boolean archived) {

        static final Foreseen NOTHING = new Foreseen(Long.MIN_VALUE, false);
    }

    /**
     * The state of a shard that has counted nothing yet.
     *
     * @param partitions how many input partitions there are
     * @param keyFingerprint stands for the key of the unit hash
     */
    CountState(int partitions, long keyFingerprint) {
        this.partitions = partitions;
        this.keyFingerprint = keyFingerprint;
    }

    StateChange shard(Watermarks watermarks, Map<RejectReason, Long> rejected) {
        return new StateChange(new byte[] {SHARD}, pack(out -> {
            out.writeInt(partitions);
            out.writeLong(keyFingerprint);
            watermarks.write(out);
            for (RejectReason reason : RejectReason.values()) {
                out.writeLong(rejected.get(reason));
            }
        }));
    }

    static StateChange experiment(ExperimentCounter counter) {
        byte[] key = pack(out -> {
            out.writeByte(EXPERIMENT);
            out.writeUTF(counter.plan().experiment());
        });
        return new StateChange(key, pack(out -> {
            out.writeUTF(counter.planDigest());
            out.writeBoolean(counter.isUntouched());
            out.writeLong(counter.sealedUntil());
            out.writeBoolean(counter.isArchived());
            out.writeInt(counter.plan().amendments().size());
            counter.outcomes().write(out);
            Map<Long, OutcomeCounts> unsealed = counter.unsealedOutcomes();
            out.writeInt(unsealed.size());
            for (Map.Entry<Long, OutcomeCounts> window : unsealed.entrySet()) {
                out.writeLong(window.getKey());
                window.getValue().write(out);
            }
        }));
    }

    /** Segments that are new since the last commit. */
    static List<StateChange> segments(ExperimentCounter counter) {
        List<StateChange> changes = new ArrayList<>();
        counter.segments()
                .ifPresent(table -> table.takeNew(
                        PACKED_BYTES,
                        (sequence, packed) -> changes.add(new StateChange(segmentKey(counter, sequence), packed))));
        return changes;
    }

    /** Removes the segments of an experiment that is over, the youngest first, so that what is left is without a gap. */
    static List<StateChange> forgetSegments(ExperimentCounter counter) {
        List<StateChange> changes = new ArrayList<>();
        counter.segments()
                .ifPresent(table -> table.clear()
                        .forEach(sequence -> changes.add(new StateChange(segmentKey(counter, sequence), null))));
        return changes;
    }

    private static byte[] segmentKey(ExperimentCounter counter, int sequence) {
        return pack(out -> {
            out.writeByte(SEGMENTS);
            out.writeUTF(counter.plan().experiment());
            out.writeInt(sequence);
        });
    }

    /** Open units that changed since the last commit. */
    List<StateChange> open(ExperimentCounter counter) {
        String experiment = counter.plan().experiment();
        TreeMap<Long, Integer> entries = openEntries.computeIfAbsent(experiment, name -> new TreeMap<>());
        OpenChunks chunks = new OpenChunks();
        counter.ledger().takeChanged(chunks);
        List<StateChange> changes = new ArrayList<>();
        chunks.take((window, packed) -> {
            int sequence = entries.merge(window, 1, Integer::sum) - 1;
            changes.add(new StateChange(key(OPEN, experiment, window, sequence), packed));
        });
        return changes;
    }

    /** The units of a window that was just sealed. */
    List<StateChange> sealed(ExperimentCounter counter, ExperimentCounter.Sealed window) {
        String experiment = counter.plan().experiment();
        long start = window.tally().startMillis();
        List<StateChange> changes = new ArrayList<>();
        for (byte[] packed : window.units()) {
            entriesOf(counter).add(start, changes.size());
            changes.add(new StateChange(key(SEALED, experiment, start, changes.size()), packed));
        }
        return changes;
    }

    private SealedEntries entriesOf(ExperimentCounter counter) {
        return sealedEntries.computeIfAbsent(
                counter.plan().experiment(),
                name -> new SealedEntries(
                        counter.plan().run().from().toEpochMilli(),
                        counter.plan().count().window().toMillis()));
    }

    /**
     * Removes sealed units of an experiment that is archived, a bounded number of windows at a time: a run of a year has too
     * many for one transaction.
     */
    List<StateChange> forgetSealed(ExperimentCounter counter) {
        List<StateChange> changes = new ArrayList<>();
        if (counter.isArchived()) {
            entriesOf(counter)
                    .take(
                            FORGOTTEN_AT_ONCE,
                            (start, sequence) -> changes.add(
                                    new StateChange(key(SEALED, counter.plan().experiment(), start, sequence), null)));
        }
        return changes;
    }

    /** Whether {@link #forgetSealed} has not come to its end. */
    boolean hasMoreToForget(ExperimentCounter counter) {
        return counter.isArchived() && !entriesOf(counter).isEmpty();
    }

    /** Removes the open entries of every window before a moment. */
    List<StateChange> forgetOpenBefore(String experiment, long sealedUntil) {
        List<StateChange> changes = new ArrayList<>();
        TreeMap<Long, Integer> entries = openEntries.get(experiment);
        if (entries == null) {
            return changes;
        }
        Map<Long, Integer> past = entries.headMap(sealedUntil);
        past.forEach((window, count) -> {
            for (int sequence = 0; sequence < count; sequence++) {
                changes.add(new StateChange(key(OPEN, experiment, window, sequence), null));
            }
        });
        past.clear();
        return changes;
    }

    /**
     * Looks at an entry that is to be restored later, one of the last. Open units of a window that has been sealed by then
     * have all been removed, and units of an experiment that has been archived too, although a log that is not compacted
     * yet still holds them: they need not be taken back to be thrown away again.
     */
    void foresee(byte[] key, byte[] value) {
        try {
            DataInputStream keyIn = reader(key);
            if (keyIn.readByte() != EXPERIMENT || value == null) {
                return;
            }
            DataInputStream in = reader(value);
            in.readUTF();
            if (in.readBoolean()) {
                return;
            }
            foreseen.put(keyIn.readUTF(), new Foreseen(in.readLong(), in.readBoolean()));
        } catch (IOException e) {
            throw cutShort(e);
        }
    }

    private static UncheckedIOException cutShort(IOException e) {
        return new UncheckedIOException("stored counts: an entry is cut short", e);
    }

    /** Applies one stored entry; entries come in the order in which they were written. */
    void restore(
            byte[] key,
            byte[] value,
            Watermarks watermarks,
            Map<RejectReason, Long> rejected,
            Map<String, ExperimentCounter> counters) {
        try {
            DataInputStream keyIn = reader(key);
            byte kind = keyIn.readByte();
            if (kind == SHARD) {
                restoreShard(value, watermarks, rejected);
                return;
            }
            if (KINDS.indexOf(kind) < 0) {
                throw new IllegalStateException("stored counts: entry of unknown kind " + (char) kind
                        + " (expected: one of " + KINDS
                        + "); the state was written by another version, whose state topics have to be removed");
            }
            String experiment = keyIn.readUTF();
            ExperimentCounter counter = counters.get(experiment);
            if (counter == null) {
                unplanned.add(experiment);
            }
            if (kind == EXPERIMENT) {
                restoreExperiment(value, counter);
            } else if (kind == SEGMENTS) {
                restoreSegments(keyIn.readInt(), value, counter);
            } else if (kind == OPEN) {
                restoreOpen(experiment, keyIn.readLong(), keyIn.readInt(), value, counter);
            } else {
                restoreSealed(keyIn.readLong(), keyIn.readInt(), value, counter);
            }
        } catch (IOException e) {
            throw cutShort(e);
        }
    }

    /** Experiments of which there is state that was not restored, as no plan was known. */
    Set<String> unplanned() {
        return unplanned;
    }

    private static DataInputStream reader(byte[] value) {
        return new DataInputStream(new ByteArrayInputStream(value));
    }

    private void restoreShard(byte[] value, Watermarks watermarks, Map<RejectReason, Long> rejected)
            throws IOException {
        DataInputStream in = reader(value);
        int partitionsBefore = in.readInt();
        if (partitionsBefore != partitions) {
            throw new PartitionsChangedException(partitionsBefore, partitions);
        }
        if (in.readLong() != keyFingerprint) {
            throw new UnitKeyChangedException();
        }
        watermarks.read(in);
        for (RejectReason reason : RejectReason.values()) {
            rejected.put(reason, in.readLong());
        }
    }

    private static void restoreExperiment(byte[] value, ExperimentCounter counter) throws IOException {
        if (counter == null) {
            return;
        }
        DataInputStream in = reader(value);
        String digest = in.readUTF();
        boolean untouched = in.readBoolean();
        if (!digest.equals(counter.planDigest()) && !untouched) {
            throw new PlanChangedException(counter.plan().experiment(), digest, counter.planDigest());
        }
        long sealedUntil = in.readLong();
        boolean archived = in.readBoolean();
        int amendments = in.readInt();
        OutcomeCounts outcomes = OutcomeCounts.read(in);
        Map<Long, OutcomeCounts> unsealed = new TreeMap<>();
        for (int rest = in.readInt(); rest > 0; rest--) {
            long window = in.readLong();
            unsealed.put(window, OutcomeCounts.read(in));
        }
        if (untouched) {
            counter.succeed(outcomes);
            return;
        }
        counter.restore(sealedUntil, outcomes, unsealed);
        counter.requireInTime(amendments);
        if (archived) {
            counter.restoreArchived();
        }
    }

    private static void restoreSegments(int sequence, byte[] value, ExperimentCounter counter) throws IOException {
        if (counter == null || counter.segments().isEmpty()) {
            return;
        }
        if (value == null) {
            counter.segments().get().clear();
        } else {
            counter.segments().get().restore(sequence, reader(value));
        }
    }

    private void restoreOpen(String experiment, long window, int sequence, byte[] value, ExperimentCounter counter) {
        if (window < foreseen(experiment).sealedUntil()) {
            return;
        }
        TreeMap<Long, Integer> entries = openEntries.computeIfAbsent(experiment, name -> new TreeMap<>());
        if (value == null) {
            entries.remove(window);
            return;
        }
        entries.merge(window, sequence + 1, Math::max);
        if (counter == null) {
            return;
        }
        ChunkReader in = new ChunkReader(value);
        while (in.hasMore()) {
            counter.restoreOpen(in);
        }
    }

    private void restoreSealed(long window, int sequence, byte[] value, ExperimentCounter counter) {
        if (counter == null) {
            return;
        }
        if (value == null) {
            entriesOf(counter).remove(window);
            return;
        }
        entriesOf(counter).add(window, sequence);
        if (foreseen(counter.plan().experiment()).archived()) {
            return;
        }
        ChunkReader in = new ChunkReader(value);
        while (in.hasMore()) {
            counter.restoreSealed(in);
        }
    }

    private Foreseen foreseen(String experiment) {
        return foreseen.getOrDefault(experiment, Foreseen.NOTHING);
    }

    private static byte[] key(byte kind, String experiment, long window, int sequence) {
        return pack(out -> {
            out.writeByte(kind);
            out.writeUTF(experiment);
            out.writeLong(window);
            out.writeInt(sequence);
        });
    }
}
