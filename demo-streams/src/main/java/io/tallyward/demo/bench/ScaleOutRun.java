package io.tallyward.demo.bench;

import com.fasterxml.jackson.databind.JsonNode;
import io.tallyward.demo.bench.MonitorProcess.Setting;
import io.tallyward.demo.check.MonitorCounts;
import io.tallyward.demo.stream.InputTopic;
import java.io.IOException;
import java.nio.file.Path;
import java.time.Duration;
import java.util.ArrayList;
import java.util.List;
import java.util.Map;
import java.util.Optional;
import java.util.TreeMap;
import java.util.function.Consumer;
import java.util.stream.Collectors;

/**
 * The same traffic on twelve partitions, counted by one instance and by three. The instances share the partitions and are
 * warm before what is measured is committed to the topic in one transaction, so that they all begin at once.
 */
final class ScaleOutRun {

    private static final int PARTITIONS = 12;
    private static final List<Integer> INSTANCES = List.of(1, 3);
    private static final long WARM_UP = 500_000;
    private static final Duration COMMIT_INTERVAL = Duration.ofSeconds(1);
    private static final Duration PATIENCE = Duration.ofSeconds(90);
    private static final long LEAST_EVENTS_PER_SECOND = 5_000;
    private static final double NANOS_PER_SECOND = 1e9;

    private final Stage stage;
    private final long events;
    private final Consumer<String> progress;
    private final Traffic traffic = Traffic.ofStories();

    /** @param events events to measure with, after a warm-up */
    ScaleOutRun(Stage stage, long events, Consumer<String> progress) {
        this.stage = stage;
        this.events = events;
        this.progress = progress;
    }

    /** @throws IllegalStateException when counts differ from each other or from what was sent */
    ScaleOutResults measure() throws IOException, InterruptedException {
        traffic.writePlans(stage.directory().resolve("plans"));
        List<ScaleOutResults.Row> rows = new ArrayList<>();
        List<Counts> counts = new ArrayList<>();
        for (int instances : INSTANCES) {
            measure(instances, rows, counts);
        }
        requireEqual(counts);
        return new ScaleOutResults(events + WARM_UP, rows);
    }

    /** All that was counted: sums by outcome since the first event, and what was sealed, cell by cell. */
    private record Counts(Map<String, Long> outcomes, Map<String, Object> sealed) {}

    private void measure(int instances, List<ScaleOutResults.Row> rows, List<Counts> counts)
            throws IOException, InterruptedException {
        String name = "scale-" + instances;
        Path plans = stage.directory().resolve("plans");
        Setting setting = new Setting(name, name + "-events", plans, COMMIT_INTERVAL, "", List.of());
        InputTopic.create(stage.bootstrapServers(), setting.topic(), PARTITIONS);
        List<MonitorProcess> monitors = new ArrayList<>();
        try {
            for (int instance = 1; instance <= instances; instance++) {
                monitors.add(MonitorProcess.start(stage, name + "-" + instance, setting));
            }
            List<Integer> shares = awaitEvenShares(monitors);
            progress.accept("instances: " + instances + ", hosting " + shares + " partitions; sending "
                    + (events + WARM_UP) + " events");
            TrafficSender.send(stage.bootstrapServers(), setting.topic(), traffic, WARM_UP);
            awaitCounted(monitors, WARM_UP);
            double cpuBefore = cpuSeconds(monitors);
            TrafficSender.sendAtOnce(stage.bootstrapServers(), setting.topic(), traffic, WARM_UP, events);
            long began = System.nanoTime();
            Map<Integer, JsonNode> counted = awaitCounted(monitors, WARM_UP + events);
            double seconds = (System.nanoTime() - began) / NANOS_PER_SECOND;
            rows.add(new ScaleOutResults.Row(
                    shares, events / seconds, (cpuSeconds(monitors) - cpuBefore) / events * 1e6));
            counts.add(new Counts(CountedEvents.byOutcome(counted), sealed(name)));
        } finally {
            monitors.forEach(MonitorProcess::close);
        }
    }

    private static double cpuSeconds(List<MonitorProcess> monitors) {
        return monitors.stream().mapToDouble(MonitorProcess::cpuSeconds).sum();
    }

    /** Waits until every partition has one owner and no instance has more than its share. */
    private static List<Integer> awaitEvenShares(List<MonitorProcess> monitors) throws InterruptedException {
        int share = PARTITIONS / monitors.size();
        long deadline = System.nanoTime() + PATIENCE.toNanos();
        List<Integer> shares = shares(monitors);
        while (!shares.stream().allMatch(hosted -> hosted == share)) {
            monitors.get(0).requireBefore(deadline, "sharing evenly, but " + shares);
            shares = shares(monitors);
        }
        return shares;
    }

    private static List<Integer> shares(List<MonitorProcess> monitors) {
        return monitors.stream()
                .map(monitor -> monitor.api().partitions().size())
                .toList();
    }

    private static Map<Integer, JsonNode> awaitCounted(List<MonitorProcess> monitors, long wanted)
            throws InterruptedException {
        long deadline = System.nanoTime()
                + PATIENCE.plusSeconds(wanted / LEAST_EVENTS_PER_SECOND).toNanos();
        while (true) {
            Optional<Map<Integer, JsonNode>> all = partitions(monitors);
            long counted = all.map(CountedEvents::in).orElse(0L);
            if (counted >= wanted) {
                return all.get();
            }
            for (MonitorProcess monitor : monitors) {
                monitor.requireBefore(deadline, "done: " + counted + " of " + wanted + " events counted");
            }
        }
    }

    /** What all instances say together; empty unless every partition has exactly one owner. */
    private static Optional<Map<Integer, JsonNode>> partitions(List<MonitorProcess> monitors) {
        Map<Integer, JsonNode> all = new TreeMap<>();
        int owners = 0;
        for (MonitorProcess monitor : monitors) {
            Map<Integer, JsonNode> its = monitor.api().partitions();
            owners += its.size();
            all.putAll(its);
        }
        return owners == PARTITIONS && all.size() == PARTITIONS ? Optional.of(all) : Optional.empty();
    }

    private Map<String, Object> sealed(String name) {
        MonitorCounts counts = MonitorCounts.read(stage.bootstrapServers(), name);
        return traffic.experiments().stream().collect(Collectors.toMap(each -> each, counts::cells));
    }

    private void requireEqual(List<Counts> counts) {
        Counts first = counts.get(0);
        for (Counts each : counts) {
            long total =
                    each.outcomes().values().stream().mapToLong(Long::longValue).sum();
            if (!each.equals(first) || total != events + WARM_UP) {
                throw new IllegalStateException("counts: " + each.outcomes() + ", with one instance "
                        + first.outcomes() + " (expected: equal in every window, " + (events + WARM_UP)
                        + " events together)");
            }
        }
    }
}
