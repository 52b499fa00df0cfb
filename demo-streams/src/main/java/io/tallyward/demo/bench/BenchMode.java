package io.tallyward.demo.bench;

import java.io.IOException;
import java.nio.file.Path;
import java.util.function.Consumer;

/** What can be measured, each with sizes that take less than five minutes on two idle cores but for the first. */
enum BenchMode {
    /** What counting costs beside reading. */
    COST(20_000_000, 3) {
        @Override
        Findings measure(Stage stage, Sizes sizes, Consumer<String> progress) throws IOException, InterruptedException {
            return new BenchRun(stage, sizes, progress).measure();
        }
    },
    /** How soon an event shows. */
    LATENCY(150_000, 1) {
        @Override
        Findings measure(Stage stage, Sizes sizes, Consumer<String> progress) throws IOException, InterruptedException {
            return new LatencyRun(stage, sizes.events(), progress).measure();
        }
    },
    /** What more instances bring. */
    SCALE_OUT(3_000_000, 1) {
        @Override
        Findings measure(Stage stage, Sizes sizes, Consumer<String> progress) throws IOException, InterruptedException {
            return new ScaleOutRun(stage, sizes.events(), progress).measure();
        }
    },
    /** Whether more partitions or experiments cost more per event. */
    GROWTH(1_500_000, 2) {
        @Override
        Findings measure(Stage stage, Sizes sizes, Consumer<String> progress) throws IOException, InterruptedException {
            return new GrowthRun(stage, sizes, progress).measure();
        }
    },
    /** How fast an instance that was killed is back. */
    RESTART(4_000_000, 3) {
        @Override
        Findings measure(Stage stage, Sizes sizes, Consumer<String> progress) throws IOException, InterruptedException {
            return new RestartRun(stage, sizes.events(), sizes.repeats(), progress).measure();
        }
    };

    private final long events;
    private final int repeats;

    BenchMode(long events, int repeats) {
        this.events = events;
        this.repeats = repeats;
    }

    /** Events to measure with unless told otherwise. */
    long events() {
        return events;
    }

    /** Rounds unless told otherwise. */
    int repeats() {
        return repeats;
    }

    /** Measures on a stage whose broker serves; the stage is closed by the caller. */
    abstract Findings measure(Stage stage, Sizes sizes, Consumer<String> progress)
            throws IOException, InterruptedException;

    /**
     * How much to measure.
     *
     * @param events events to measure with
     * @param repeats rounds
     * @param recordings where to leave a flight recording of each run; null for none
     */
    record Sizes(long events, int repeats, Path recordings) {}
}
