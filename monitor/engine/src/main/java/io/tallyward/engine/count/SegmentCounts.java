package io.tallyward.engine.count;

import io.tallyward.engine.count.WindowTally.SegmentCell;
import io.tallyward.engine.plan.Plan;
import java.util.ArrayList;
import java.util.Comparator;
import java.util.List;
import java.util.Map;
import java.util.TreeMap;

/** Units of one window by the value of each segment field, allocation epoch and variant. */
final class SegmentCounts {

    private final Plan plan;
    private final SegmentTable table;
    private final int variants;
    private final int cells;

    /** By code of the combination of values. */
    private final Map<Integer, long[]> units = new TreeMap<>();

    SegmentCounts(Plan plan, SegmentTable table) {
        this.plan = plan;
        this.table = table;
        variants = plan.variants().size();
        cells = (plan.epochCount()) * variants;
    }

    /**
     * Adds a unit.
     *
     * @param first event time of its standing first exposure
     * @param code code of the segments of that exposure
     */
    void add(int variant, long first, int code) {
        units.computeIfAbsent(code, absent -> new long[cells])[plan.epochAt(first) * variants + variant]++;
    }

    /** The counts, by field and value; values become told under their own names while there is room. */
    List<SegmentCell> list() {
        List<SegmentCell> list = new ArrayList<>();
        for (int field = 0; field < table.fields().size(); field++) {
            Map<String, long[]> told = told(field, byValue(field));
            for (Map.Entry<String, long[]> value : told.entrySet()) {
                addCells(list, table.fields().get(field), value.getKey(), value.getValue());
            }
        }
        return list;
    }

    private Map<String, long[]> byValue(int field) {
        Map<String, long[]> byValue = new TreeMap<>();
        units.forEach(
                (code, counts) -> add(byValue.computeIfAbsent(table.value(code, field), v -> new long[cells]), counts));
        return byValue;
    }

    private Map<String, long[]> told(int field, Map<String, long[]> byValue) {
        List<String> newcomers = byValue.keySet().stream()
                .filter(value -> !table.isTold(field, value))
                .sorted(Comparator.comparing((String value) -> -sum(byValue.get(value)))
                        .thenComparing(Comparator.naturalOrder()))
                .toList();
        newcomers.forEach(value -> table.tell(field, value));
        Map<String, long[]> told = new TreeMap<>();
        byValue.forEach((value, counts) -> {
            String name = table.isTold(field, value) ? value : SegmentTable.OTHER_VALUE;
            add(told.computeIfAbsent(name, absent -> new long[cells]), counts);
        });
        return told;
    }

    private static long sum(long[] counts) {
        long sum = 0;
        for (long count : counts) {
            sum += count;
        }
        return sum;
    }

    private static void add(long[] sums, long[] counts) {
        for (int i = 0; i < sums.length; i++) {
            sums[i] += counts[i];
        }
    }

    private void addCells(List<SegmentCell> list, String field, String value, long[] counts) {
        for (int cell = 0; cell < cells; cell++) {
            if (counts[cell] > 0) {
                list.add(new SegmentCell(field, value, cell / variants, cell % variants, counts[cell]));
            }
        }
    }
}
