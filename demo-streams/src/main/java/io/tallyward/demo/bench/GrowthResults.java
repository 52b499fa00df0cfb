package io.tallyward.demo.bench;

import com.fasterxml.jackson.databind.ObjectMapper;
import com.fasterxml.jackson.databind.node.ArrayNode;
import com.fasterxml.jackson.databind.node.ObjectNode;
import io.tallyward.demo.bench.GrowthRun.Load;
import io.tallyward.demo.check.TextTable;
import java.util.ArrayList;
import java.util.HashMap;
import java.util.List;
import java.util.Locale;
import java.util.Map;
import java.util.function.ToDoubleFunction;
import java.util.stream.IntStream;

/** What counting cost with more and more of something; a ratio is the median of the ratios within a round. */
final class GrowthResults implements Findings {

    private final List<Load> byPartitions;
    private final List<Load> byExperiments;
    private final Map<Load, List<Measurement>> measured = new HashMap<>();

    /**
     * Results without a measurement yet.
     *
     * @param byPartitions loads of more and more partitions
     * @param byExperiments loads of more and more experiments
     */
    GrowthResults(List<Load> byPartitions, List<Load> byExperiments) {
        this.byPartitions = byPartitions;
        this.byExperiments = byExperiments;
    }

    /** Adds one run; the loads of a round are added before the next round. */
    void add(Load load, Measurement measurement) {
        measured.computeIfAbsent(load, first -> new ArrayList<>()).add(measurement);
    }

    double cpuSecondsPerMillion(Load load) {
        return median(load, Measurement::cpuSecondsPerMillion);
    }

    private double median(Load load, ToDoubleFunction<Measurement> value) {
        return BenchResults.median(
                measured.get(load).stream().mapToDouble(value).toArray());
    }

    /** How a load's cost compares with that of the first of its series. */
    double ratio(Load load, Load first) {
        List<Measurement> runs = measured.get(load);
        List<Measurement> firstRuns = measured.get(first);
        return BenchResults.median(IntStream.range(0, runs.size())
                .mapToDouble(round -> runs.get(round).cpuSecondsPerMillion()
                        / firstRuns.get(round).cpuSecondsPerMillion())
                .toArray());
    }

    @Override
    public List<String> lines() {
        List<List<String>> rows = new ArrayList<>();
        addRows(rows, byPartitions);
        addRows(rows, byExperiments);
        List<String> lines = new ArrayList<>(new TextTable(
                        List.of("partitions", "experiments", "CPU-s per million", "ratio to the first", "events/s"),
                        rows)
                .lines());
        lines.add("The same number of events each time, all of them counted and none late; one worker.");
        return lines;
    }

    private void addRows(List<List<String>> rows, List<Load> series) {
        for (Load load : series) {
            rows.add(List.of(
                    Integer.toString(load.partitions()),
                    String.format(Locale.ROOT, "%,d", load.experiments()),
                    String.format(Locale.ROOT, "%.2f", cpuSecondsPerMillion(load)),
                    String.format(Locale.ROOT, "%.2f", ratio(load, series.get(0))),
                    String.format(Locale.ROOT, "%,.0f", median(load, Measurement::eventsPerSecond))));
        }
    }

    @Override
    public String json() {
        ObjectNode all = new ObjectMapper().createObjectNode();
        ObjectNode growth = all.putObject("growth");
        addSeries(growth.putArray("byPartitions"), byPartitions);
        addSeries(growth.putArray("byExperiments"), byExperiments);
        return all.toString();
    }

    private void addSeries(ArrayNode array, List<Load> series) {
        for (Load load : series) {
            array.addObject()
                    .put("partitions", load.partitions())
                    .put("experiments", load.experiments())
                    .put("cpuSecondsPerMillion", cpuSecondsPerMillion(load))
                    .put("ratioToFirst", ratio(load, series.get(0)))
                    .put("eventsPerSecond", median(load, Measurement::eventsPerSecond));
        }
    }
}
