package io.tallyward.demo.bench;

import io.tallyward.demo.WorkDirectory;
import io.tallyward.demo.bench.BenchMode.Sizes;
import java.io.IOException;
import java.io.PrintWriter;
import java.nio.file.Files;
import java.nio.file.Path;
import java.util.concurrent.Callable;
import picocli.CommandLine.ArgGroup;
import picocli.CommandLine.Command;
import picocli.CommandLine.Model.CommandSpec;
import picocli.CommandLine.Option;
import picocli.CommandLine.ParameterException;
import picocli.CommandLine.Spec;

/** Measures what counting costs on this machine. */
@Command(
        name = "bench",
        mixinStandardHelpOptions = true,
        sortOptions = false,
        description = {
            "Measures what counting costs on this machine, beside merely reading the topic.",
            "",
            "Starts a broker, sends events and lets every case read them in a process of its own, all cases in turn and"
                    + " then again: raw-poll, raw-parse, count-unit, count-view and, for comparison, the same windows counted"
                    + " with the Kafka Streams DSL. Prints medians. Fails if the monitor misses an event or calls one"
                    + " late."
        })
public final class BenchCommand implements Callable<Integer> {

    private static final long LEAST_EVENTS = 100_000;
    private static final long MOST_EVENTS = 200_000_000;
    private static final int MOST_REPEATS = 20;

    /** Ended by a signal, as shells say it of SIGINT. */
    private static final int STOPPED = 130;

    @ArgGroup
    private Instead instead = new Instead();

    /** What to measure instead of the cost of counting; at most one. */
    static final class Instead {

        @Option(
                names = "--memory",
                description = "Measure memory per unit and the speed of restoring instead; needs no broker.")
        private boolean memory;

        @Option(
                names = "--latency",
                description =
                        "Measure how long an event takes from the producer to the published counts, at 5,000 events/s"
                                + " and commit intervals of 1 s and 100 ms (--events: 150,000 for each).")
        private boolean latency;

        @Option(
                names = "--scale-out",
                description = "Measure the same traffic on 12 partitions with one instance and with three, whose counts"
                        + " must be equal (--events: 3,000,000).")
        private boolean scaleOut;

        @Option(
                names = "--growth",
                description = "Measure the cost of count-unit with 1 to 8 partitions and with 1 to 1,000 experiments"
                        + " (--events: 1,500,000, --repeats: 2).")
        private boolean growth;

        @Option(
                names = "--restart",
                description = "Measure how fast an instance that was killed is ready and counts again (--events:"
                        + " 4,000,000, which are a million units; --repeats: 3).")
        private boolean restart;
    }

    @Option(
            names = "--events",
            paramLabel = "N",
            description =
                    "Events to measure with, after a warm-up (default: 20,000,000; a million takes about a minute a"
                            + " round).")
    private Long events;

    @Option(names = "--repeats", paramLabel = "N", description = "Rounds of all cases (default: 3).")
    private Integer repeats;

    @Option(names = "--json", description = "Print one JSON object instead of a table.")
    private boolean json;

    @Option(
            names = "--recordings",
            paramLabel = "DIR",
            description = "Leave a JDK flight recording of every case in this directory.")
    private Path recordings;

    @Spec
    private CommandSpec spec;

    @Override
    public Integer call() throws IOException, InterruptedException {
        BenchMode mode = mode();
        Sizes sizes = new Sizes(
                events == null ? mode.events() : events,
                repeats == null ? mode.repeats() : repeats,
                recordings == null ? null : Files.createDirectories(recordings).toAbsolutePath());
        requireRange("--events", sizes.events(), LEAST_EVENTS, MOST_EVENTS);
        requireRange("--repeats", sizes.repeats(), 1, MOST_REPEATS);
        try (OrderlyStop stop = OrderlyStop.listen()) {
            try (WorkDirectory directory = WorkDirectory.open(null);
                    Stage stage = new Stage(directory.path())) {
                measure(mode, stage, sizes);
                return 0;
            } catch (InterruptedException | RuntimeException failure) {
                if (stop.happened()) {
                    return STOPPED;
                }
                throw failure;
            }
        }
    }

    private BenchMode mode() {
        if (instead.latency) {
            return BenchMode.LATENCY;
        }
        if (instead.scaleOut) {
            return BenchMode.SCALE_OUT;
        }
        if (instead.growth) {
            return BenchMode.GROWTH;
        }
        return instead.restart ? BenchMode.RESTART : BenchMode.COST;
    }

    private void measure(BenchMode mode, Stage stage, Sizes sizes) throws IOException, InterruptedException {
        PrintWriter out = spec.commandLine().getOut();
        Findings findings = instead.memory ? MemoryRun.measure(stage) : measureWithBroker(mode, stage, sizes);
        if (json) {
            out.println(findings.json());
        } else {
            findings.lines().forEach(out::println);
        }
        out.flush();
    }

    private Findings measureWithBroker(BenchMode mode, Stage stage, Sizes sizes)
            throws IOException, InterruptedException {
        stage.startBroker();
        PrintWriter err = spec.commandLine().getErr();
        return mode.measure(stage, sizes, line -> say(err, line));
    }

    private static void say(PrintWriter to, String line) {
        to.println(line);
        to.flush();
    }

    private void requireRange(String option, long value, long least, long most) {
        if (!(value >= least && value <= most)) {
            throw new ParameterException(
                    spec.commandLine(), option + ": " + value + " (expected: " + least + " to " + most + ")");
        }
    }
}
