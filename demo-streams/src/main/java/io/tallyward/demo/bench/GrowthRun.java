package io.tallyward.demo.bench;

import io.tallyward.demo.bench.BenchMode.Sizes;
import io.tallyward.demo.stream.InputTopic;
import java.io.IOException;
import java.nio.file.Path;
import java.util.List;
import java.util.Locale;
import java.util.function.Consumer;
import java.util.stream.IntStream;
import java.util.stream.Stream;

/** Whether counting costs the same per event with more partitions and with more experiments, the events being as many. */
final class GrowthRun {

    private static final long WARM_UP = 500_000;
    private static final int STORIES = 5;

    private final Stage stage;
    private final Sizes sizes;
    private final Consumer<String> progress;

    GrowthRun(Stage stage, Sizes sizes, Consumer<String> progress) {
        this.stage = stage;
        this.sizes = sizes;
        this.progress = progress;
    }

    /**
     * What is counted in one run.
     *
     * @param partitions partitions of its topic
     * @param experiments experiments over which its events are spread
     */
    record Load(int partitions, int experiments) {

        String name() {
            return "growth-" + partitions + "x" + experiments;
        }
    }

    GrowthResults measure() throws IOException, InterruptedException {
        List<Load> byPartitions = IntStream.of(1, 2, 4, 8)
                .mapToObj(partitions -> new Load(partitions, STORIES))
                .toList();
        List<Load> byExperiments = IntStream.of(1, 10, 100, 1_000)
                .mapToObj(experiments -> new Load(BenchRun.PARTITIONS, experiments))
                .toList();
        List<Load> all =
                Stream.concat(byPartitions.stream(), byExperiments.stream()).toList();
        for (Load load : all) {
            prepare(load);
        }
        GrowthResults results = new GrowthResults(byPartitions, byExperiments);
        CaseRun cases = new CaseRun(stage, sizes.recordings());
        for (int round = 1; round <= sizes.repeats(); round++) {
            for (Load load : all) {
                Measurement measurement = cases.run(BenchCase.COUNT_UNIT, task(load, round));
                progress.accept(String.format(
                        Locale.ROOT,
                        "round %d: %d partitions, %,d experiments: %.2f CPU-s per million",
                        round,
                        load.partitions(),
                        load.experiments(),
                        measurement.cpuSecondsPerMillion()));
                results.add(load, measurement);
            }
        }
        return results;
    }

    private void prepare(Load load) throws IOException, InterruptedException {
        Traffic traffic = Traffic.over(load.experiments());
        traffic.writePlans(plans(load));
        InputTopic.create(stage.bootstrapServers(), load.name(), load.partitions());
        progress.accept("sending " + events() + " events to " + load.partitions() + " partitions for "
                + load.experiments() + " experiments");
        TrafficSender.send(stage.bootstrapServers(), load.name(), traffic, events());
    }

    private Path plans(Load load) {
        return stage.directory().resolve(load.name() + "-plans");
    }

    private long events() {
        return sizes.events() + WARM_UP;
    }

    private CaseMain.Task task(Load load, int round) {
        return new CaseMain.Task(
                stage.directory(),
                stage.bootstrapServers(),
                load.name(),
                plans(load),
                events(),
                WARM_UP,
                load.name() + "-" + round);
    }
}
