package io.tallyward.service.command;

import io.tallyward.engine.plan.Plan;
import io.tallyward.service.config.document.BadInputException;
import io.tallyward.service.config.document.Problem;
import io.tallyward.service.config.document.ScalarType;
import io.tallyward.service.plan.PlanReader;
import io.tallyward.service.rehearse.Rehearsal;
import io.tallyward.service.rehearse.RehearsalReport;
import io.tallyward.service.rehearse.RehearsalRequest;
import java.nio.file.Path;
import java.util.List;
import java.util.Optional;
import java.util.OptionalLong;
import me.tongfei.progressbar.ConsoleProgressBarConsumer;
import me.tongfei.progressbar.ProgressBar;
import me.tongfei.progressbar.ProgressBarBuilder;
import me.tongfei.progressbar.ProgressBarStyle;
import picocli.CommandLine.Command;
import picocli.CommandLine.ITypeConverter;
import picocli.CommandLine.Option;
import picocli.CommandLine.TypeConversionException;

/** How a plan would do if it were carried out many times. */
@Command(
        name = "rehearse",
        description =
                "Carry a plan out many times on simulated counts, with the rules that decide in earnest, and show how "
                        + "often it stops, when, and how good its estimates are.",
        mixinStandardHelpOptions = true,
        exitCodeListHeading = ExitCode.HEADING,
        exitCodeList = {
            "0:The runs are done and summed up.",
            "2:An argument or the plan cannot be used.",
            "3:Something unforeseen happened."
        })
final class RehearseCommand extends CommandBase {

    private static final int MOST_RUNS = 10_000_000;
    private static final int MOST_PER_DAY = 1_000_000_000;
    private static final int MOST_THREADS = 256;

    /** How often the progress bar is drawn again. */
    private static final int REDRAW_MILLIS = 250;

    @Option(names = "--plan", required = true, paramLabel = "FILE", description = "The plan file.")
    private Path file;

    @Option(
            names = "--runs",
            paramLabel = "N",
            defaultValue = "1000",
            converter = Runs.class,
            description = "How many times (default: ${DEFAULT-VALUE}).")
    private int runs;

    @Option(
            names = "--seed",
            paramLabel = "S",
            defaultValue = "1",
            converter = Seed.class,
            description = "Where chance starts; same seed, same result (default: ${DEFAULT-VALUE}).")
    private long seed;

    @Option(
            names = "--rates",
            paramLabel = "LIST",
            defaultValue = "",
            description =
                    "True success rates, as in plain=0.12,wide=0.126. Variants that are not named have the baseline "
                            + "of the plan; by default all have, which is no effect.")
    private String rates;

    @Option(
            names = "--per-day",
            paramLabel = "N",
            converter = PerDay.class,
            description =
                    "Units exposed per day, all variants together (default: as many as reach the planned trials at the "
                            + "end of the run).")
    private Integer perDay;

    @Option(names = "--fixed-split", description = "Split the units as planned instead of at random.")
    private boolean fixedSplit;

    @Option(names = "--no-estimates", description = "Leave the estimates and intervals out, which is faster.")
    private boolean withoutEstimates;

    @Option(
            names = "--threads",
            paramLabel = "T",
            converter = Threads.class,
            description =
                    "How many threads share the work (default: one per processor). The result does not depend on it.")
    private Integer threads;

    @Override
    ExitCode run(Output output) throws BadInputException, InterruptedException {
        Plan plan = PlanReader.read(file).orElseThrow();
        RehearsalRequest request = new RehearsalRequest(
                runs,
                seed,
                RateList.parse(rates, plan),
                perDay == null ? OptionalLong.empty() : OptionalLong.of(perDay),
                fixedSplit,
                !withoutEstimates,
                threads == null ? processors() : threads);
        Rehearsal rehearsal = prepared(plan, request);
        List<PlannedComparison> planned = PlannedComparison.all(file, plan, Optional.empty());
        RehearsalReport report = carryOut(rehearsal, !output.json() && System.console() != null);
        if (output.json()) {
            output.line(RehearseJson.object(plan, request, report, planned));
        } else {
            new RehearseText(plan, request, report, planned).lines().forEach(output::line);
        }
        return ExitCode.FINE;
    }

    private static int processors() {
        return Math.min(MOST_THREADS, Runtime.getRuntime().availableProcessors());
    }

    private Rehearsal prepared(Plan plan, RehearsalRequest request) throws BadInputException {
        try {
            return new Rehearsal(plan, request);
        } catch (IllegalArgumentException e) {
            throw new BadInputException(List.of(Problem.of(
                    file.toString(),
                    "the plan cannot be rehearsed: " + e.getMessage(),
                    "",
                    "Change the plan, or --per-day.")));
        }
    }

    private RehearsalReport carryOut(Rehearsal rehearsal, boolean terminal) throws InterruptedException {
        if (!terminal) {
            return rehearsal.run(done -> {});
        }
        try (ProgressBar bar = new ProgressBarBuilder()
                .setTaskName("rehearsing")
                .setInitialMax(runs)
                .setUnit(" runs", 1)
                .setStyle(ProgressBarStyle.ASCII)
                .setUpdateIntervalMillis(REDRAW_MILLIS)
                .setConsumer(new ConsoleProgressBarConsumer(System.err))
                .build()) {
            return rehearsal.run(bar::stepBy);
        }
    }

    private abstract static class WholeNumber implements ITypeConverter<Integer> {

        private final ScalarType<Integer> type;

        WholeNumber(int most) {
            type = ScalarType.wholeNumber(1, most);
        }

        @Override
        public Integer convert(String text) {
            return type.parse()
                    .apply(text)
                    .orElseThrow(() -> new TypeConversionException(text + " (expected: " + type.expected() + ")"));
        }
    }

    /** Any 64-bit number. */
    private static final class Seed implements ITypeConverter<Long> {
        @Override
        public Long convert(String text) {
            try {
                return Long.valueOf(text);
            } catch (NumberFormatException e) {
                throw new TypeConversionException(
                        text + " (expected: whole number from " + Long.MIN_VALUE + " to " + Long.MAX_VALUE + ")");
            }
        }
    }

    private static final class Runs extends WholeNumber {
        Runs() {
            super(MOST_RUNS);
        }
    }

    private static final class PerDay extends WholeNumber {
        PerDay() {
            super(MOST_PER_DAY);
        }
    }

    private static final class Threads extends WholeNumber {
        Threads() {
            super(MOST_THREADS);
        }
    }
}
