package io.tallyward.demo.bench;

import io.tallyward.demo.bench.BenchMode.Sizes;
import io.tallyward.demo.stream.InputTopic;
import java.io.IOException;
import java.nio.file.Path;
import java.util.Locale;
import java.util.function.Consumer;

/** A topic full of events, and every case in turn, each a process of its own. */
final class BenchRun {

    static final int PARTITIONS = 4;

    /** Events read before measuring begins, so that the compiler has done most of its work. */
    static final long WARM_UP = 500_000;

    private static final String TOPIC = "northwater-events";

    private final Stage stage;
    private final Sizes sizes;
    private final Consumer<String> progress;

    /** A run on a stage whose broker serves. */
    BenchRun(Stage stage, Sizes sizes, Consumer<String> progress) {
        this.stage = stage;
        this.sizes = sizes;
        this.progress = progress;
    }

    BenchResults measure() throws IOException, InterruptedException {
        Path plans = stage.directory().resolve("plans");
        Traffic traffic = Traffic.ofStories();
        traffic.writePlans(plans);
        InputTopic.create(stage.bootstrapServers(), TOPIC, PARTITIONS);
        long events = sizes.events() + WARM_UP;
        progress.accept("sending " + events + " events");
        long bytes = TrafficSender.send(stage.bootstrapServers(), TOPIC, traffic, events);
        progress.accept("values have " + bytes / events + " bytes on average");
        CaseRun cases = new CaseRun(stage, sizes.recordings());
        BenchResults results = new BenchResults();
        for (int round = 1; round <= sizes.repeats(); round++) {
            for (BenchCase each : BenchCase.values()) {
                String run = each.code() + "-" + round;
                Measurement measurement = cases.run(
                        each,
                        new CaseMain.Task(
                                stage.directory(), stage.bootstrapServers(), TOPIC, plans, events, WARM_UP, run));
                progress.accept(String.format(
                        Locale.ROOT,
                        "round %d %-11s %6.2f CPU-s per million, %,.0f events/s",
                        round,
                        each.code(),
                        measurement.cpuSecondsPerMillion(),
                        measurement.eventsPerSecond()));
                results.add(each, measurement);
            }
        }
        return results;
    }
}
