package io.tallyward.demo;

import io.tallyward.demo.chaos.ChaosReport;
import io.tallyward.demo.chaos.ChaosRun;
import io.tallyward.demo.story.Scenario;
import java.nio.file.Path;
import java.time.Duration;
import java.util.concurrent.Callable;
import java.util.function.Consumer;
import picocli.CommandLine.Command;
import picocli.CommandLine.Model.CommandSpec;
import picocli.CommandLine.Option;
import picocli.CommandLine.ParameterException;
import picocli.CommandLine.Spec;

/** The command line of the chaos run. */
@Command(
        name = "chaos",
        mixinStandardHelpOptions = true,
        sortOptions = false,
        description = {
            "Attacks a running monitor and compares.",
            "",
            "Kills, stops, freezes, adds and removes instances of the monitor and takes its broker away while events flow;"
                    + " then every count must equal the truth, and every decision record and notice those of an undisturbed"
                    + " monitor, byte for byte."
        },
        exitCodeListHeading = "%nExit codes:%n",
        exitCodeList = {
            "0:all is equal",
            "1:something differs, or the run was not done in time",
            "2:wrong arguments",
            "3:something could not be started or stopped working"
        })
final class ChaosCommand implements Callable<Integer> {

    private static final int MOST_FAULTS = 10_000;
    private static final long LEAST_EVENTS = 100_000;
    private static final long MOST_EVENTS = 1_000_000_000;
    private static final int LEAST_SECONDS = 30;
    private static final int MOST_SECONDS = 86_400;

    @Option(
            names = "--faults",
            paramLabel = "N",
            defaultValue = "50",
            description = "How many faults (default: ${DEFAULT-VALUE}).")
    private int faults;

    @Option(
            names = "--events",
            paramLabel = "N",
            defaultValue = "5000000",
            description = "About how many events (default: ${DEFAULT-VALUE}).")
    private long events;

    @Option(
            names = "--seed",
            paramLabel = "S",
            defaultValue = "" + Scenario.DEFAULT_SEED,
            description = "Seed of the stream and of the faults (default: ${DEFAULT-VALUE}).")
    private long seed;

    @Option(
            names = "--seconds",
            paramLabel = "MAX",
            defaultValue = "2400",
            description = "Give up, and fail, when the run takes longer (default: ${DEFAULT-VALUE}).")
    private int seconds;

    @Option(names = "--spare-broker", description = "Strike instances of the monitor only, never the broker.")
    private boolean brokerSpared;

    @Option(
            names = "--port",
            paramLabel = "N",
            defaultValue = "0",
            description = "Port of the first instance's page, as long as it lives (default: any free one).")
    private int port;

    @Option(names = "--json", description = "Print the report as one JSON object and nothing else.")
    private boolean json;

    @Option(
            names = "--keep",
            paramLabel = "DIR",
            description =
                    "Work in this directory and leave everything there: plans, configurations, logs, broker data.")
    private Path keep;

    @Spec
    private CommandSpec spec;

    @Override
    public Integer call() throws Exception {
        requireRange("--faults", faults, 1, MOST_FAULTS);
        requireRange("--events", events, LEAST_EVENTS, MOST_EVENTS);
        requireRange("--seconds", seconds, LEAST_SECONDS, MOST_SECONDS);
        requireRange("--port", port, 0, 65_535);
        Screen screen = Screen.standard();
        Consumer<String> say = json ? line -> {} : screen::line;
        WorkDirectory directory = WorkDirectory.open(keep);
        ChaosRun.Options options =
                new ChaosRun.Options(faults, events, seed, brokerSpared, Duration.ofSeconds(seconds), port);
        ChaosRun run = new ChaosRun(options, directory.path(), say);
        Interruption interruption = Interruption.listen(screen, run::closeInHurry, directory);
        try (interruption;
                directory;
                run) {
            return carryOut(run, say, screen);
        } catch (Exception failure) {
            if (interruption.happened()) {
                return DemoCommand.BROKEN_SURROUNDINGS;
            }
            throw failure;
        }
    }

    private int carryOut(ChaosRun run, Consumer<String> say, Screen screen) throws Exception {
        say.accept(faults + " faults over about " + events + " events, seed " + seed);
        ChaosReport report = run.carryOut();
        if (json) {
            screen.line(report.json());
        } else {
            screen.line("");
            report.lines().forEach(screen::line);
        }
        return report.holds() ? 0 : 1;
    }

    private void requireRange(String option, long value, long least, long most) {
        if (!(value >= least && value <= most)) {
            throw new ParameterException(
                    spec.commandLine(), option + ": " + value + " (expected: " + least + " to " + most + ")");
        }
    }
}
