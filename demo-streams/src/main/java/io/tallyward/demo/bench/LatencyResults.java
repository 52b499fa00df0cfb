package io.tallyward.demo.bench;

import com.fasterxml.jackson.databind.ObjectMapper;
import com.fasterxml.jackson.databind.node.ArrayNode;
import com.fasterxml.jackson.databind.node.ObjectNode;
import io.tallyward.demo.check.TextTable;
import java.time.Duration;
import java.util.ArrayList;
import java.util.List;
import java.util.Locale;

/**
 * How long events took to become visible.
 *
 * @param perSecond events sent per second
 * @param rows one per commit interval
 */
record LatencyResults(long perSecond, List<Row> rows) implements Findings {

    private static final double NANOS_PER_MILLI = 1e6;

    /**
     * The latencies at one commit interval.
     *
     * @param interval the commit interval
     * @param events how many events were measured
     * @param medianMillis the latency that half of them do not exceed
     * @param highMillis the latency that 99 % of them do not exceed
     * @param longestMillis the longest
     */
    record Row(Duration interval, long events, double medianMillis, double highMillis, double longestMillis) {

        /** From latencies in nanoseconds, ascending. */
        static Row of(Duration interval, long[] ascending) {
            return new Row(
                    interval,
                    ascending.length,
                    Sightings.quantile(ascending, 0.5) / NANOS_PER_MILLI,
                    Sightings.quantile(ascending, 0.99) / NANOS_PER_MILLI,
                    Sightings.quantile(ascending, 1) / NANOS_PER_MILLI);
        }

        double medianToInterval() {
            return medianMillis / interval.toMillis();
        }

        double highToInterval() {
            return highMillis / interval.toMillis();
        }
    }

    @Override
    public List<String> lines() {
        List<List<String>> cells = new ArrayList<>();
        for (Row row : rows) {
            cells.add(List.of(
                    row.interval().toMillis() + " ms",
                    String.format(Locale.ROOT, "%,d", row.events()),
                    format("%.0f ms", row.medianMillis()),
                    format("%.0f ms", row.highMillis()),
                    format("%.0f ms", row.longestMillis()),
                    format("%.2f", row.medianToInterval()),
                    format("%.2f", row.highToInterval())));
        }
        List<String> lines = new ArrayList<>(new TextTable(
                        List.of("commit interval", "events", "p50", "p99", "longest", "p50/interval", "p99/interval"),
                        cells)
                .lines());
        lines.add("From sending to showing in the published counts, at " + perSecond
                + " events/s (goal: p99 at most 1.5 intervals). Every event was counted.");
        return lines;
    }

    private static String format(String pattern, double value) {
        return String.format(Locale.ROOT, pattern, value);
    }

    @Override
    public String json() {
        ObjectNode all = new ObjectMapper().createObjectNode();
        ArrayNode latency = all.putArray("latency");
        for (Row row : rows) {
            latency.addObject()
                    .put("commitIntervalMillis", row.interval().toMillis())
                    .put("eventsPerSecond", perSecond)
                    .put("events", row.events())
                    .put("p50Millis", row.medianMillis())
                    .put("p99Millis", row.highMillis())
                    .put("longestMillis", row.longestMillis())
                    .put("p50ToInterval", row.medianToInterval())
                    .put("p99ToInterval", row.highToInterval());
        }
        return all.toString();
    }
}
