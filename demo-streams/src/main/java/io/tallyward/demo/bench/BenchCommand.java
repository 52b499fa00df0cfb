package io.tallyward.demo.bench;

import io.tallyward.demo.WorkDirectory;
import java.io.IOException;
import java.io.PrintWriter;
import java.nio.file.Files;
import java.nio.file.Path;
import java.util.concurrent.Callable;
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
                    + " then again: raw-poll, raw-parse, count-unit and, for comparison, the same windows counted with the"
                    + " Kafka Streams DSL. Prints medians. Fails if count-unit misses an event or calls one late."
        })
public final class BenchCommand implements Callable<Integer> {

    private static final long LEAST_EVENTS = 100_000;
    private static final long MOST_EVENTS = 200_000_000;
    private static final int MOST_REPEATS = 20;

    /** Ended by a signal, as shells say it of SIGINT. */
    private static final int STOPPED = 130;

    @Option(
            names = "--events",
            paramLabel = "N",
            defaultValue = "20000000",
            description =
                    "Events to measure with, after a warm-up of 500,000 (default: ${DEFAULT-VALUE}; a million takes"
                            + " about a minute a round).")
    private long events;

    @Option(
            names = "--repeats",
            paramLabel = "N",
            defaultValue = "3",
            description = "Rounds of all cases (default: ${DEFAULT-VALUE}).")
    private int repeats;

    @Option(names = "--json", description = "Print one JSON object instead of a table.")
    private boolean json;

    @Option(
            names = "--recordings",
            paramLabel = "DIR",
            description = "Leave a JDK flight recording of every run in this directory.")
    private Path recordings;

    @Option(
            names = "--memory",
            description = "Measure memory per unit and the speed of restoring instead; needs no broker.")
    private boolean memory;

    @Spec
    private CommandSpec spec;

    @Override
    public Integer call() throws IOException, InterruptedException {
        requireRange("--events", events, LEAST_EVENTS, MOST_EVENTS);
        requireRange("--repeats", repeats, 1, MOST_REPEATS);
        if (recordings != null) {
            Files.createDirectories(recordings);
        }
        PrintWriter out = spec.commandLine().getOut();
        PrintWriter err = spec.commandLine().getErr();
        try (OrderlyStop stop = OrderlyStop.listen()) {
            try (WorkDirectory directory = WorkDirectory.open(null)) {
                if (memory) {
                    MemoryRun.measure(directory.path()).forEach(out::println);
                } else {
                    bench(directory.path(), out, err);
                }
            } catch (InterruptedException | RuntimeException failure) {
                if (stop.happened()) {
                    return STOPPED;
                }
                throw failure;
            }
        }
        out.flush();
        return 0;
    }

    private void bench(Path directory, PrintWriter out, PrintWriter err) throws IOException, InterruptedException {
        Path absolute = recordings == null ? null : recordings.toAbsolutePath();
        BenchRun.Options options = new BenchRun.Options(events, repeats, absolute);
        try (BenchRun run = new BenchRun(directory, options, line -> say(err, line))) {
            BenchResults results = run.measure();
            if (json) {
                out.println(results.json());
            } else {
                results.table().forEach(out::println);
                out.println("count-unit counted every event and called none late, in every round.");
            }
        }
        say(json ? err : out, "There is no count-view: the monitor does not count by view yet.");
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
