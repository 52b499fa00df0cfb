package io.tallyward.engine.decide;

import io.tallyward.engine.count.WindowTally.SegmentCell;
import java.io.DataInput;
import java.io.DataOutput;
import java.io.IOException;
import java.util.Comparator;
import java.util.HashMap;
import java.util.List;
import java.util.Map;
import java.util.TreeMap;

/**
 * Units of one allocation epoch by segment field, value and variant. Of each field {@value #MOST_VALUES} values are kept,
 * those that came first (of one window, those of the most units, then by name); further ones count as {@code other}. What is
 * kept depends on the windows and their order alone.
 */
final class SegmentUnits {

    private static final int MOST_VALUES = 32;

    /** Those that are kept, and the rest of them. */
    static final int MOST_NAMES = MOST_VALUES + 1;

    private static final String OTHER = "other";

    private final int variants;
    private final Map<String, Map<String, long[]>> units = new TreeMap<>();

    SegmentUnits(int variants) {
        this.variants = variants;
    }

    /** Adds the counts of one window. */
    void add(List<SegmentCell> cells) {
        Map<SegmentValue, Long> sums = new HashMap<>();
        cells.forEach(cell -> sums.merge(new SegmentValue(cell.field(), cell.value()), cell.units(), Long::sum));
        sums.entrySet().stream()
                .sorted(Map.Entry.<SegmentValue, Long>comparingByValue(Comparator.reverseOrder())
                        .thenComparing(entry -> entry.getKey().value()))
                .forEach(entry -> keep(entry.getKey()));
        for (SegmentCell cell : cells) {
            Map<String, long[]> values = units.get(cell.field());
            long[] counts = values.get(cell.value());
            (counts == null ? values.get(OTHER) : counts)[cell.variant()] += cell.units();
        }
    }

    private record SegmentValue(String field, String value) {}

    private void keep(SegmentValue segment) {
        Map<String, long[]> values = units.computeIfAbsent(segment.field(), field -> new TreeMap<>());
        int named = values.size() - (values.containsKey(OTHER) ? 1 : 0);
        String name = values.containsKey(segment.value()) || named < MOST_VALUES ? segment.value() : OTHER;
        values.computeIfAbsent(name, absent -> new long[variants]);
    }

    /** Units by variant, by field and value; not to be changed. */
    Map<String, Map<String, long[]>> byField() {
        return units;
    }

    void write(DataOutput out) throws IOException {
        out.writeInt(units.size());
        for (Map.Entry<String, Map<String, long[]>> field : units.entrySet()) {
            out.writeUTF(field.getKey());
            out.writeInt(field.getValue().size());
            for (Map.Entry<String, long[]> value : field.getValue().entrySet()) {
                out.writeUTF(value.getKey());
                for (long count : value.getValue()) {
                    SplitHistory.writeCount(out, count);
                }
            }
        }
    }

    void read(DataInput in) throws IOException {
        units.clear();
        for (int fields = in.readInt(); fields > 0; fields--) {
            Map<String, long[]> values = new TreeMap<>();
            units.put(in.readUTF(), values);
            for (int rest = in.readInt(); rest > 0; rest--) {
                long[] counts = new long[variants];
                values.put(in.readUTF(), counts);
                for (int variant = 0; variant < variants; variant++) {
                    counts[variant] = SplitHistory.readCount(in);
                }
            }
        }
    }
}
