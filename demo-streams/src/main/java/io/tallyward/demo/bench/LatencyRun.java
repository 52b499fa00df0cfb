package io.tallyward.demo.bench;

import com.fasterxml.jackson.databind.JsonNode;
import io.tallyward.demo.bench.MonitorProcess.Setting;
import io.tallyward.demo.stream.InputTopic;
import java.io.IOException;
import java.nio.file.Path;
import java.time.Duration;
import java.util.ArrayList;
import java.util.Arrays;
import java.util.List;
import java.util.Map;
import java.util.concurrent.TimeUnit;
import java.util.function.Consumer;
import java.util.stream.LongStream;

/**
 * How long an event takes from the producer's hands to the monitor's published counts, at an even pace, for two commit
 * intervals. The counts are read by partition, because only within a partition does a count tell which events it contains;
 * the gauges and counters of the metrics are made from the same snapshot, and their sum is compared at the end.
 */
final class LatencyRun {

    private static final int PARTITIONS = 4;
    private static final long PER_SECOND = 5_000;
    private static final Duration WARM_UP = Duration.ofSeconds(10);
    private static final Duration PATIENCE = Duration.ofSeconds(60);
    private static final long LOOK_MILLIS = 5;
    private static final List<Duration> COMMIT_INTERVALS = List.of(Duration.ofSeconds(1), Duration.ofMillis(100));

    private final Stage stage;
    private final long events;
    private final Consumer<String> progress;

    /** @param events events to measure with, for each commit interval */
    LatencyRun(Stage stage, long events, Consumer<String> progress) {
        this.stage = stage;
        this.events = events;
        this.progress = progress;
    }

    LatencyResults measure() throws IOException, InterruptedException {
        List<LatencyResults.Row> rows = new ArrayList<>();
        for (Duration interval : COMMIT_INTERVALS) {
            rows.add(measure(interval));
        }
        return new LatencyResults(PER_SECOND, rows);
    }

    private LatencyResults.Row measure(Duration interval) throws IOException, InterruptedException {
        String run = "latency-" + interval.toMillis();
        Path plans = stage.directory().resolve("plans");
        Traffic traffic = Traffic.ofStories();
        traffic.writePlans(plans);
        InputTopic.create(stage.bootstrapServers(), run + "-events", PARTITIONS);
        Setting setting = new Setting(run, run + "-events", plans, interval, "", List.of());
        long all = events + WARM_UP.toSeconds() * PER_SECOND;
        progress.accept("commit interval " + interval.toMillis() + " ms: " + all / PER_SECOND + " s of events");
        try (MonitorProcess monitor = MonitorProcess.start(stage, run, setting)) {
            monitor.awaitReady(PATIENCE);
            try (SteadySender sender = SteadySender.start(
                    stage.bootstrapServers(),
                    setting.topic(),
                    PARTITIONS,
                    traffic,
                    new SteadySender.Pace(0, all, PER_SECOND))) {
                long from = System.nanoTime() + WARM_UP.toNanos();
                List<Sightings> sightings = watch(monitor, sender, all);
                requireSameInMetrics(monitor, all);
                return LatencyResults.Row.of(interval, latencies(sightings, sender, from));
            }
        }
    }

    /** Looks every few milliseconds until all events are counted. */
    private List<Sightings> watch(MonitorProcess monitor, SteadySender sender, long all) throws InterruptedException {
        List<Sightings> sightings = new ArrayList<>();
        for (int partition = 0; partition < PARTITIONS; partition++) {
            sightings.add(new Sightings());
        }
        long deadline =
                System.nanoTime() + PATIENCE.plusSeconds(2 * all / PER_SECOND).toNanos();
        while (sightings.stream().mapToLong(Sightings::highest).sum() < all) {
            sender.requireDelivery();
            monitor.requireBefore(deadline, "done with counting " + all + " events");
            Map<Integer, JsonNode> partitions = monitor.api().partitions();
            long now = System.nanoTime();
            partitions.forEach((partition, counted) -> sightings.get(partition).saw(now, CountedEvents.in(counted)));
        }
        return sightings;
    }

    private static void requireSameInMetrics(MonitorProcess monitor, long all) throws InterruptedException {
        TimeUnit.MILLISECONDS.sleep(LOOK_MILLIS);
        long told = Math.round(
                monitor.api().metric("tallyward_events_total") + monitor.api().metric("tallyward_events_open"));
        if (told != all) {
            throw new IllegalStateException(
                    "metrics: " + told + " events with an outcome or open (expected: the " + all + " that were sent)");
        }
    }

    private static long[] latencies(List<Sightings> sightings, SteadySender sender, long fromNanos) {
        LongStream all = LongStream.empty();
        for (int partition = 0; partition < PARTITIONS; partition++) {
            long[] sent = sender.times(partition).toArray();
            all = LongStream.concat(all, Arrays.stream(sightings.get(partition).latencies(sent, fromNanos)));
        }
        return all.sorted().toArray();
    }
}
