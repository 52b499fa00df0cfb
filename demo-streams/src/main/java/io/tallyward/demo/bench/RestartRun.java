package io.tallyward.demo.bench;

import com.fasterxml.jackson.databind.JsonNode;
import io.tallyward.demo.bench.MonitorProcess.Setting;
import io.tallyward.demo.stream.InputTopic;
import java.io.IOException;
import java.nio.file.Path;
import java.time.Duration;
import java.util.ArrayList;
import java.util.List;
import java.util.Map;
import java.util.function.Consumer;
import java.util.stream.IntStream;
import java.util.stream.LongStream;

/**
 * Kills an instance that remembers many units while events come, starts it again at once and measures how long it is not
 * ready and how long nothing is counted, in each {@link RestartWay}.
 */
final class RestartRun {

    private static final int PARTITIONS = 4;
    private static final long PER_SECOND = 1_000;
    private static final Duration COMMIT_INTERVAL = Duration.ofSeconds(1);
    private static final Duration PATIENCE = Duration.ofSeconds(90);
    private static final long LEAST_EVENTS_PER_SECOND = 5_000;
    private static final double LEAST_RESTORE_SECONDS = 0.001;
    private static final String NAME = "restart";
    private static final String TOPIC = NAME + "-events";
    private static final String RESTORE = "tallyward_restore_duration_seconds";

    private final Stage stage;
    private final long events;
    private final int repeats;
    private final Consumer<String> progress;
    private final Traffic traffic = Traffic.ofStories();

    /** Events that each partition holds without those of the sender at work. */
    private final long[] before = new long[PARTITIONS];

    private int starts;

    /**
     * @param events events that fill the ledger, a quarter as many units
     * @param repeats how many times to kill each of them
     */
    RestartRun(Stage stage, long events, int repeats, Consumer<String> progress) {
        this.stage = stage;
        this.events = events;
        this.repeats = repeats;
        this.progress = progress;
    }

    RestartResults measure() throws IOException, InterruptedException {
        traffic.writePlans(stage.directory().resolve("plans"));
        InputTopic.create(stage.bootstrapServers(), TOPIC, PARTITIONS);
        progress.accept("sending " + events + " events");
        TrafficSender.send(stage.bootstrapServers(), TOPIC, traffic, events);
        List<RestartResults.Row> rows = new ArrayList<>();
        for (RestartWay way : RestartWay.values()) {
            if (way.archived()) {
                archiveClasses();
            }
            killAgainAndAgain(way, rows);
        }
        return new RestartResults(rows);
    }

    /** An archive is written at the end of a process that ends in good order. */
    private void archiveClasses() throws IOException, InterruptedException {
        progress.accept("archiving the classes of an instance that runs and stops");
        List<String> archiving =
                List.of("-XX:ArchiveClassesAtExit=" + archive(), "-Xlog:cds=error", "-Xlog:cds+dynamic=error");
        try (MonitorProcess monitor = start(RestartWay.KEPT_NAME, archiving)) {
            monitor.awaitReady(PATIENCE);
        }
    }

    private Path archive() {
        return stage.directory().resolve(NAME + ".jsa");
    }

    private void killAgainAndAgain(RestartWay way, List<RestartResults.Row> rows)
            throws IOException, InterruptedException {
        MonitorProcess monitor = start(way);
        try {
            long sent = LongStream.of(before).sum();
            Map<Integer, JsonNode> counted = awaitCounted(monitor, sent == 0 ? events : sent);
            counted.forEach((partition, its) -> before[partition] = CountedEvents.in(its));
            progress.accept("the ledger holds " + CountedEvents.units(counted) + " units");
            for (int kill = 1; kill <= repeats; kill++) {
                monitor.awaitReady(PATIENCE);
                try (SteadySender sender = sender()) {
                    awaitNews(monitor, sender, System.nanoTime());
                    monitor.kill();
                    long killed = System.nanoTime();
                    monitor = start(way);
                    RestartResults.Row row = watch(way, monitor, sender, killed);
                    progress.accept(row.sentence());
                    rows.add(row);
                    sender.finish();
                    for (int partition = 0; partition < PARTITIONS; partition++) {
                        before[partition] += sender.times(partition).toArray().length;
                    }
                }
            }
            awaitCounted(monitor, LongStream.of(before).sum());
        } finally {
            monitor.close();
        }
    }

    private MonitorProcess start(RestartWay way) throws IOException {
        return start(way, way.archived() ? List.of("-XX:SharedArchiveFile=" + archive()) : List.of());
    }

    private MonitorProcess start(RestartWay way, List<String> virtualMachine) throws IOException {
        starts++;
        Setting setting = new Setting(
                NAME,
                TOPIC,
                stage.directory().resolve("plans"),
                COMMIT_INTERVAL,
                way.named() ? ", instance: " + NAME : "",
                virtualMachine);
        return MonitorProcess.start(stage, NAME + "-" + starts, setting);
    }

    private SteadySender sender() {
        return SteadySender.start(
                stage.bootstrapServers(),
                TOPIC,
                PARTITIONS,
                traffic,
                new SteadySender.Pace(LongStream.of(before).sum(), 2 * PATIENCE.toSeconds() * PER_SECOND, PER_SECOND));
    }

    private static Map<Integer, JsonNode> awaitCounted(MonitorProcess monitor, long wanted)
            throws InterruptedException {
        long deadline = System.nanoTime()
                + PATIENCE.plusSeconds(wanted / LEAST_EVENTS_PER_SECOND).toNanos();
        Map<Integer, JsonNode> partitions = monitor.api().partitions();
        while (CountedEvents.in(partitions) != wanted) {
            monitor.requireBefore(
                    deadline, "done: " + CountedEvents.in(partitions) + " of " + wanted + " events counted");
            partitions = monitor.api().partitions();
        }
        return partitions;
    }

    private RestartResults.Row watch(RestartWay way, MonitorProcess monitor, SteadySender sender, long killed)
            throws InterruptedException {
        long ready = monitor.awaitReady(PATIENCE);
        double cpuSeconds = monitor.cpuSeconds();
        long counting = awaitNews(monitor, sender, killed);
        Map<Integer, JsonNode> partitions = monitor.api().partitions();
        long units = CountedEvents.units(partitions);
        double restore = monitor.api().metric(RESTORE, "group=\"count\"");
        return new RestartResults.Row(
                way,
                units,
                ready - killed,
                cpuSeconds,
                counting - killed,
                units / (PARTITIONS * Math.max(restore, LEAST_RESTORE_SECONDS)));
    }

    /** Waits until the counts of every partition contain an event that was sent after a moment. */
    private long awaitNews(MonitorProcess monitor, SteadySender sender, long momentNanos) throws InterruptedException {
        long deadline = System.nanoTime() + PATIENCE.toNanos();
        while (!showsNews(monitor.api().partitions(), sender, momentNanos)) {
            sender.requireDelivery();
            monitor.requireBefore(deadline, "counting again");
        }
        return System.nanoTime();
    }

    private boolean showsNews(Map<Integer, JsonNode> partitions, SteadySender sender, long momentNanos) {
        return IntStream.range(0, PARTITIONS)
                .allMatch(partition -> partitions.containsKey(partition)
                        && CountedEvents.in(partitions.get(partition))
                                > before[partition] + sender.times(partition).countUntil(momentNanos));
    }
}
