package io.tallyward.demo.bench;

import com.fasterxml.jackson.databind.ObjectMapper;
import com.fasterxml.jackson.databind.node.ArrayNode;
import com.fasterxml.jackson.databind.node.ObjectNode;
import io.tallyward.demo.check.TextTable;
import java.util.ArrayList;
import java.util.List;
import java.util.Locale;
import java.util.function.ToDoubleFunction;

/**
 * How an instance came back after it was killed.
 *
 * @param rows one per kill, at least one
 */
record RestartResults(List<Row> rows) implements Findings {

    private static final double NANOS_PER_SECOND = 1e9;

    /**
     * One kill.
     *
     * @param way how it was started
     * @param units units in the ledger
     * @param readyNanos from the kill, which was followed by the start at once, to being ready
     * @param cpuSeconds CPU time, user and system, that the instance had used when it was ready
     * @param countingNanos from the kill until an event sent after it showed in every partition's count
     * @param restoredPerSecond units restored per second of a worker's time
     */
    record Row(
            RestartWay way,
            long units,
            long readyNanos,
            double cpuSeconds,
            long countingNanos,
            double restoredPerSecond) {

        double readySeconds() {
            return readyNanos / NANOS_PER_SECOND;
        }

        double countingSeconds() {
            return countingNanos / NANOS_PER_SECOND;
        }

        String sentence() {
            return String.format(
                    Locale.ROOT,
                    "%s: ready after %.2f s and %.1f CPU-s, counting again after %.2f s, %,.0f units restored per second",
                    way.words(),
                    readySeconds(),
                    cpuSeconds,
                    countingSeconds(),
                    restoredPerSecond);
        }
    }

    @Override
    public List<String> lines() {
        List<List<String>> cells = new ArrayList<>();
        for (RestartWay way : RestartWay.values()) {
            List<Row> its = rows.stream().filter(row -> row.way() == way).toList();
            if (!its.isEmpty()) {
                cells.add(List.of(
                        way.words(),
                        Integer.toString(its.size()),
                        seconds(its, Row::readySeconds),
                        String.format(Locale.ROOT, "%.1f", median(its, Row::cpuSeconds)),
                        seconds(its, Row::countingSeconds),
                        String.format(Locale.ROOT, "%,.0f", median(its, Row::units)),
                        String.format(Locale.ROOT, "%,.0f", median(its, Row::restoredPerSecond))));
            }
        }
        List<String> lines = new ArrayList<>(new TextTable(
                        List.of(
                                "started as",
                                "kills",
                                "to ready",
                                "CPU-s",
                                "to counting again",
                                "units",
                                "units/s restored"),
                        cells)
                .lines());
        lines.add(
                "Seconds from kill -9, which a start followed at once: median and longest (goal: ready within 3 s with a"
                        + " million units; 1,000,000 units restored per second, here by each worker). Every event was counted once.");
        return lines;
    }

    private static double median(List<Row> rows, ToDoubleFunction<Row> value) {
        return BenchResults.median(rows.stream().mapToDouble(value).toArray());
    }

    private static String seconds(List<Row> rows, ToDoubleFunction<Row> value) {
        return String.format(
                Locale.ROOT,
                "%.2f s (%.2f s)",
                median(rows, value),
                rows.stream().mapToDouble(value).max().orElseThrow());
    }

    @Override
    public String json() {
        ObjectNode all = new ObjectMapper().createObjectNode();
        ArrayNode kills = all.putArray("restart");
        for (Row row : rows) {
            kills.addObject()
                    .put("nameKept", row.way().named())
                    .put("classArchive", row.way().archived())
                    .put("units", row.units())
                    .put("readySeconds", row.readySeconds())
                    .put("cpuSeconds", row.cpuSeconds())
                    .put("countingAgainSeconds", row.countingSeconds())
                    .put("unitsRestoredPerSecond", row.restoredPerSecond());
        }
        return all.toString();
    }
}
