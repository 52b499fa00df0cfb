package io.tallyward.demo.bench;

import com.fasterxml.jackson.databind.ObjectMapper;
import com.fasterxml.jackson.databind.node.ArrayNode;
import com.fasterxml.jackson.databind.node.ObjectNode;
import io.tallyward.demo.check.TextTable;
import java.util.ArrayList;
import java.util.List;
import java.util.Locale;
import java.util.stream.Collectors;

/**
 * What more instances bring. Counts are equal, or there would be no results.
 *
 * @param events events that were sent and counted by each number of instances, warm-up included
 * @param rows one per number of instances; the first is what the others are compared with
 */
record ScaleOutResults(long events, List<Row> rows) implements Findings {

    /**
     * What one number of instances did.
     *
     * @param shares partitions that each instance hosted
     * @param eventsPerSecond events counted and committed per second, all instances together
     * @param cpuSecondsPerMillion CPU time of all instances together, user and system
     */
    record Row(List<Integer> shares, double eventsPerSecond, double cpuSecondsPerMillion) {}

    private double gain(Row row) {
        return row.eventsPerSecond() / rows.get(0).eventsPerSecond();
    }

    @Override
    public List<String> lines() {
        List<List<String>> cells = new ArrayList<>();
        for (Row row : rows) {
            cells.add(List.of(
                    Integer.toString(row.shares().size()),
                    row.shares().stream().map(String::valueOf).collect(Collectors.joining("/")),
                    String.format(Locale.ROOT, "%,.0f", row.eventsPerSecond()),
                    String.format(Locale.ROOT, "%.2f", gain(row)),
                    String.format(Locale.ROOT, "%.2f", row.cpuSecondsPerMillion())));
        }
        List<String> lines = new ArrayList<>(
                new TextTable(List.of("instances", "partitions", "events/s", "ratio", "CPU-s per million"), cells)
                        .lines());
        lines.add(String.format(
                Locale.ROOT,
                "Every count is the same with each number of instances, and all %,d events are counted; %d processors.",
                events,
                Runtime.getRuntime().availableProcessors()));
        return lines;
    }

    @Override
    public String json() {
        ObjectNode all = new ObjectMapper().createObjectNode();
        ArrayNode list = all.putArray("scaleOut");
        for (Row row : rows) {
            ObjectNode one = list.addObject();
            one.put("instances", row.shares().size());
            ArrayNode shares = one.putArray("partitions");
            row.shares().forEach(shares::add);
            one.put("eventsPerSecond", row.eventsPerSecond())
                    .put("ratio", gain(row))
                    .put("cpuSecondsPerMillion", row.cpuSecondsPerMillion());
        }
        all.put("events", events).put("countsEqual", true);
        return all.toString();
    }
}
