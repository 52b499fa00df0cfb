package io.tallyward.demo.bench;

import com.fasterxml.jackson.databind.ObjectMapper;
import com.fasterxml.jackson.databind.node.ArrayNode;
import com.fasterxml.jackson.databind.node.ObjectNode;
import io.tallyward.demo.check.TextTable;
import java.util.ArrayList;
import java.util.Arrays;
import java.util.EnumMap;
import java.util.List;
import java.util.Locale;
import java.util.Map;
import java.util.function.ToDoubleFunction;
import java.util.stream.IntStream;

/** The measurements of all rounds. A ratio is the median of the ratios within a round, which see the same machine. */
final class BenchResults implements Findings {

    private final Map<BenchCase, List<Measurement>> measured = new EnumMap<>(BenchCase.class);

    BenchResults() {
        for (BenchCase each : BenchCase.values()) {
            measured.put(each, new ArrayList<>());
        }
    }

    /** Adds one run; the cases of a round are added before the next round. */
    void add(BenchCase measuredCase, Measurement measurement) {
        measured.get(measuredCase).add(measurement);
    }

    double cpuSecondsPerMillion(BenchCase of) {
        return medianOf(of, Measurement::cpuSecondsPerMillion);
    }

    double eventsPerSecond(BenchCase of) {
        return medianOf(of, Measurement::eventsPerSecond);
    }

    double ratioToRawPoll(BenchCase of) {
        List<Measurement> polls = measured.get(BenchCase.RAW_POLL);
        List<Measurement> runs = measured.get(of);
        return median(IntStream.range(0, runs.size())
                .mapToDouble(round -> runs.get(round).cpuSecondsPerMillion()
                        / polls.get(round).cpuSecondsPerMillion())
                .toArray());
    }

    private double medianOf(BenchCase of, ToDoubleFunction<Measurement> value) {
        return median(measured.get(of).stream().mapToDouble(value).toArray());
    }

    /** The middle value; of an even number, the mean of the two in the middle. */
    static double median(double[] values) {
        double[] sorted = values.clone();
        Arrays.sort(sorted);
        int middle = sorted.length / 2;
        return sorted.length % 2 == 1 ? sorted[middle] : (sorted[middle - 1] + sorted[middle]) / 2;
    }

    @Override
    public List<String> lines() {
        List<List<String>> rows = new ArrayList<>();
        measured.forEach((each, runs) -> rows.add(List.of(
                each.code(),
                format("%.2f", cpuSecondsPerMillion(each)),
                format("%.1f", ratioToRawPoll(each)),
                format("%,.0f", eventsPerSecond(each)))));
        List<String> lines = new ArrayList<>(
                new TextTable(List.of("case", "CPU-s per million", "ratio to raw-poll", "events/s"), rows).lines());
        lines.add("count-unit and count-view counted every event and called none late, in every round.");
        return lines;
    }

    private static String format(String pattern, double value) {
        return String.format(Locale.ROOT, pattern, value);
    }

    @Override
    public String json() {
        ObjectNode all = new ObjectMapper().createObjectNode();
        ArrayNode cases = all.putArray("cases");
        measured.forEach((each, runs) -> cases.addObject()
                .put("name", each.code())
                .put("cpuSecondsPerMillion", cpuSecondsPerMillion(each))
                .put("ratioToRawPoll", ratioToRawPoll(each))
                .put("eventsPerSecond", eventsPerSecond(each)));
        return all.toString();
    }
}
