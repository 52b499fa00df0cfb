package io.tallyward.demo;

import io.tallyward.demo.check.Report;
import io.tallyward.demo.story.Scenario;
import io.tallyward.demo.stream.StreamFile;
import java.io.IOException;
import java.nio.file.Files;
import java.nio.file.Path;
import java.time.Duration;
import java.util.concurrent.Callable;
import java.util.concurrent.CountDownLatch;
import picocli.CommandLine.Command;
import picocli.CommandLine.Model.CommandSpec;
import picocli.CommandLine.Option;
import picocli.CommandLine.ParameterException;
import picocli.CommandLine.Spec;

/** The command line of the demonstration. */
@Command(
        name = "tallyward-demo",
        mixinStandardHelpOptions = true,
        version = "tallyward-demo 0.1.0",
        sortOptions = false,
        description = {
            "Runs Tallyward beside an invented event stream whose truth is known, and compares.",
            "",
            "Starts a broker and the monitor on this machine, streams two weeks of views and clicks of six"
                    + " experiments, prints every webhook notice as it arrives and ends with the truth beside the verdicts."
        },
        exitCodeListHeading = "%nExit codes:%n",
        exitCodeList = {
            "0:all checks hold",
            "1:a check does not hold",
            "2:wrong arguments",
            "3:something could not be started or stopped working"
        })
final class DemoCommand implements Callable<Integer> {

    static final int WRONG_ARGUMENTS = 2;
    static final int BROKEN_SURROUNDINGS = 3;

    private static final int MOST_SECONDS = 86_400;
    private static final int MOST_KILLS = 20;

    @Option(
            names = "--seconds",
            paramLabel = "N",
            defaultValue = "90",
            description = "How long the two weeks take; 0 for as fast as possible (default: ${DEFAULT-VALUE}).")
    private int seconds;

    @Option(
            names = "--port",
            paramLabel = "N",
            defaultValue = "0",
            description = "Port of the monitor's page, API and metrics (default: any free one).")
    private int port;

    @Option(
            names = "--seed",
            paramLabel = "S",
            defaultValue = "" + Scenario.DEFAULT_SEED,
            description = "Seed of the stream; everything follows from it (default: ${DEFAULT-VALUE}).")
    private long seed;

    @Option(names = "--exit", description = "End after the table instead of leaving the page up until Ctrl-C.")
    private boolean exit;

    @Option(
            names = "--kill-monitor",
            paramLabel = "N",
            arity = "0..1",
            fallbackValue = "1",
            defaultValue = "0",
            description = "Kill the monitor without warning N times in mid-stream (once without N) and start it again;"
                    + " the counts must come out the same.")
    private int kills;

    @Option(
            names = "--replay",
            description = "Also replay the stream from a file and compare every decision record with the monitor's.")
    private boolean replay;

    @Option(
            names = "--write-file",
            paramLabel = "FILE",
            description =
                    "Write the stream to a file, one JSON object per line, with its plans beside it," + " and end.")
    private Path file;

    @Option(
            names = "--keep",
            paramLabel = "DIR",
            description = "Work in this directory and leave everything there: plans, configuration, logs, broker data.")
    private Path keep;

    @Spec
    private CommandSpec spec;

    @Override
    public Integer call() throws Exception {
        requireRange("--seconds", seconds, 0, MOST_SECONDS);
        requireRange("--port", port, 0, 65_535);
        requireRange("--kill-monitor", kills, 0, MOST_KILLS);
        Screen screen = Screen.standard();
        Scenario scenario = Scenario.of(seed);
        if (file != null) {
            writeFile(scenario, screen);
            return 0;
        }
        screen.line(opening(scenario, seconds));
        DemoRun.Options options = new DemoRun.Options(Duration.ofSeconds(seconds), port, kills, replay);
        WorkDirectory directory = WorkDirectory.open(keep);
        DemoRun run = new DemoRun(scenario, options, directory.path(), screen);
        Interruption interruption = Interruption.listen(screen, run::stopInHurry, directory);
        try (interruption;
                directory;
                run) {
            return demonstrate(run, screen);
        } catch (Exception failure) {
            if (interruption.happened()) {
                return BROKEN_SURROUNDINGS;
            }
            throw failure;
        }
    }

    private int demonstrate(DemoRun run, Screen screen) throws IOException, InterruptedException {
        run.start();
        Report report = run.stream();
        screen.line("");
        report.lines().forEach(screen::line);
        if (!exit) {
            run.showAddresses();
            new CountDownLatch(1).await();
        }
        return report.holds() ? 0 : 1;
    }

    /** What is to come, in one line. */
    static String opening(Scenario scenario, int seconds) {
        return StreamProgress.DAYS + " invented days of Northwater "
                + (seconds == 0 ? "as fast as possible" : "in about " + seconds + " s") + ": "
                + scenario.stories().size() + " experiments whose truth is known";
    }

    private void writeFile(Scenario scenario, Screen screen) throws IOException {
        Path directory = file.toAbsolutePath().getParent();
        Files.createDirectories(directory);
        StreamFile.write(scenario, file);
        Path plans = directory.resolve("plans");
        scenario.writePlans(plans);
        screen.line(scenario.events().size() + " events written to " + file);
        screen.line("to decide over them: java -jar deploy/target/tallyward.jar replay --events " + file + " --plans "
                + plans + " --partitions " + DemoRun.PARTITIONS);
    }

    private void requireRange(String option, int value, int least, int most) {
        if (!(value >= least && value <= most)) {
            throw new ParameterException(
                    spec.commandLine(), option + ": " + value + " (expected: " + least + " to " + most + ")");
        }
    }
}
