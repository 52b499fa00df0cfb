package io.tallyward.engine.decide;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.engine.count.OutcomeCounts;
import io.tallyward.engine.count.SealCause;
import io.tallyward.engine.count.TallyUpdate;
import io.tallyward.engine.count.WindowTally;
import io.tallyward.engine.count.WindowTally.Cell;
import io.tallyward.engine.count.WindowTally.SegmentCell;
import io.tallyward.engine.decide.Completeness.Entry;
import io.tallyward.engine.shard.Packing;
import java.io.ByteArrayInputStream;
import java.io.DataInputStream;
import java.io.IOException;
import java.util.ArrayList;
import java.util.List;
import java.util.Optional;
import org.junit.jupiter.api.Test;

class CompletenessTest {

    private static final long START = 1_000_000;
    private static final long WINDOW = 60_000;
    private static final int PARTITIONS = 41;
    private static final int FIELDS = 4;
    private static final int VALUES = 33;
    private static final int VARIANTS = 10;

    private final Completeness completeness = new Completeness(START);
    private final List<Entry> log = new ArrayList<>();

    /** Every partition has seen other values in every field: as much as one window can hold. */
    private void flood(Completeness taking, int from, int to) {
        for (int partition = from; partition < to; partition++) {
            taking.add(flooded(partition));
        }
    }

    private static TallyUpdate flooded(int partition) {
        List<Cell> cells = new ArrayList<>();
        List<SegmentCell> segments = new ArrayList<>();
        for (int variant = 0; variant < VARIANTS; variant++) {
            cells.add(Cell.ofUnits(0, variant, 5, 2));
            for (int field = 0; field < FIELDS; field++) {
                for (int value = 0; value < VALUES; value++) {
                    String text = value == 0 ? "other" : "value-" + value + "-of-partition-" + partition;
                    segments.add(new SegmentCell("field-" + field, text, 0, variant, 1 + partition));
                }
            }
        }
        WindowTally window = new WindowTally(START, cells, segments, OutcomeCounts.NONE);
        return new TallyUpdate(
                "quay-banner", "digest", partition, PARTITIONS, START + WINDOW, SealCause.WATERMARK, List.of(window));
    }

    private void commit() {
        log.addAll(completeness.takeChanged());
    }

    private Completeness restarted() throws IOException {
        Completeness fresh = new Completeness(START);
        fresh.read(new DataInputStream(new ByteArrayInputStream(Packing.pack(completeness::write))));
        for (Entry entry : log) {
            Optional<Completeness.Parts> parts = Optional.empty();
            if (entry.parts().isPresent()) {
                byte[] packed = Packing.pack(entry.parts().get()::write);
                assertTrue(packed.length <= Completeness.PIECE_BYTES + 10_000, packed.length + " bytes in one entry");
                parts = Optional.of(Completeness.Parts.read(new DataInputStream(new ByteArrayInputStream(packed))));
            }
            fresh.restore(new Entry(entry.windowStart(), entry.number(), parts));
        }
        return fresh;
    }

    @Test
    void keepsEntriesSmallHoweverManySegmentsAWindowHas() throws IOException {
        for (int partition = 0; partition < PARTITIONS - 1; partition++) {
            flood(completeness, partition, partition + 1);
            commit();
        }
        assertTrue(log.stream().mapToInt(Entry::number).max().orElseThrow() > 1, "a flood takes several entries");
        Completeness restarted = restarted();
        flood(completeness, PARTITIONS - 1, PARTITIONS);
        flood(restarted, PARTITIONS - 1, PARTITIONS);
        assertEquals(START + WINDOW, restarted.completeUntil());
        Completeness.Parts parts = restarted.take(START);
        assertEquals(completeness.take(START), parts);
        assertEquals(
                VARIANTS * FIELDS * (1 + (VALUES - 1) * PARTITIONS),
                parts.segments().size());
        assertEquals(5L * PARTITIONS, parts.cells().get(0).units());
    }

    @Test
    void leavesNoEntryOfACompleteWindowBehind() throws IOException {
        flood(completeness, 0, PARTITIONS - 1);
        commit();
        long entries = log.size();
        flood(completeness, PARTITIONS - 1, PARTITIONS);
        completeness.take(START);
        List<Entry> removals = completeness.takeChanged();
        assertEquals(entries, removals.size());
        assertTrue(removals.stream().allMatch(entry -> entry.parts().isEmpty()));
        log.addAll(removals);
        assertEquals(Completeness.Parts.NONE, restarted().take(START));
    }

    @Test
    void removesEntriesThatItHasRestoredToo() throws IOException {
        flood(completeness, 0, PARTITIONS - 1);
        commit();
        Completeness restarted = restarted();
        flood(restarted, PARTITIONS - 1, PARTITIONS);
        restarted.take(START);
        assertEquals(log.size(), restarted.takeChanged().size());
    }

    @Test
    void writesNothingOfAWindowThatWasCompleteAtOnce() {
        flood(completeness, 0, PARTITIONS);
        completeness.take(START);
        assertEquals(List.of(), completeness.takeChanged());
    }
}
