package io.tallyward.service.command;

import io.tallyward.connector.kafka.LogBound;
import io.tallyward.engine.count.CountSettings;
import io.tallyward.engine.plan.Plan;
import io.tallyward.service.config.ConfigReader;
import io.tallyward.service.config.InputStart;
import io.tallyward.service.config.ServiceConfig;
import io.tallyward.service.config.document.BadInputException;
import io.tallyward.service.config.document.Problem;
import io.tallyward.service.config.document.ScalarType;
import io.tallyward.service.plan.PlanReader;
import java.nio.file.Path;
import java.time.Duration;
import java.util.ArrayList;
import java.util.List;
import java.util.Map;
import java.util.Optional;
import picocli.CommandLine.Command;
import picocli.CommandLine.ITypeConverter;
import picocli.CommandLine.Option;
import picocli.CommandLine.TypeConversionException;

/** Counts and decides over a file of events, or over the input topics once more. */
@Command(
        name = "replay",
        description =
                "Count and decide over a file of events, or over input topics, as the service would, without side effects.",
        mixinStandardHelpOptions = true,
        exitCodeListHeading = ExitCode.HEADING,
        exitCodeList = {
            "0:The input was read to its end; rejected records are told and change nothing here.",
            "2:An argument, a plan, the configuration or the file of events cannot be used.",
            "3:The broker does not answer or refuses."
        })
final class ReplayCommand extends CommandBase {

    private static final int MAX_PARTITIONS = 4_096;

    /** Nothing is idle in a replay; any length will do. */
    private static final Duration IDLE_AFTER = Duration.ofDays(1);

    private final Map<String, String> environment;
    private final InputTopics.Brokers brokers;

    @Option(
            names = "--plans",
            paramLabel = "DIR",
            description = "The directory of the plan files. With --config: instead of the book of plans.")
    private Path directory;

    @Option(
            names = "--events",
            paramLabel = "FILE",
            description = "The events, one JSON document per line, in the order they were received.")
    private Path file;

    @Option(
            names = "--partitions",
            paramLabel = "N",
            converter = Partitions.class,
            description = "With --events: count as if they came in this many partitions (default: 1).")
    private Integer partitions;

    @Option(
            names = "--max-skew",
            paramLabel = "DURATION",
            converter = Skew.class,
            description =
                    "With --events: how far an event may lie ahead of the time in its member 'received', which stands"
                            + " for the timestamp of its record; not checked where there is none (default: PT5M).")
    private Duration maxSkew;

    @Option(
            names = "--config",
            paramLabel = "FILE",
            description = "Instead of --events: the configuration of a service whose input topics are read.")
    private Path config;

    @Option(
            names = "--from",
            paramLabel = "BOUND",
            converter = Bound.class,
            description =
                    "With --config: the first record of each partition, by a time such as 2026-05-04T00:00:00Z, the"
                            + " first timestamp, or by offsets such as events-0@1200,events-1@900 (default: where the"
                            + " configuration has the service start if that is a time, else the oldest record).")
    private LogBound from;

    @Option(
            names = "--to",
            paramLabel = "BOUND",
            converter = Bound.class,
            description = "With --config: in the same way the first record that is left out (default: the end of each"
                    + " partition as it is now).")
    private LogBound to;

    @Option(
            names = "--seal-open",
            description = "With --config: count the windows that are still open at the end too, as with a file.")
    private boolean sealOpen;

    @Option(
            names = "--as-if",
            paramLabel = "PLAN",
            description = "Decide the same input under this plan file too, another plan of one of the experiments, and"
                    + " show both side by side.")
    private Path asIf;

    ReplayCommand(Map<String, String> environment, InputTopics.Brokers brokers) {
        this.environment = environment;
        this.brokers = brokers;
    }

    @Override
    ExitCode run(Output output) throws BadInputException, SurroundingsException {
        ReplayInput input = input();
        List<Plan> plans = input.plans();
        List<Replay> replays = new ArrayList<>(List.of(input.replay(plans)));
        if (asIf != null) {
            replays.add(input.replay(
                    List.of(Hypothesis.plan(asIf, PlanReader.read(asIf).orElseThrow(), plans))));
        }
        input.feed(replays);
        Replay replay = replays.get(0);
        Optional<Hypothesis> hypothesis =
                asIf == null ? Optional.empty() : Optional.of(Hypothesis.of(replay, replays.get(1)));
        if (output.json()) {
            new ReplayJson(replay).writeTo(output);
            hypothesis.ifPresent(other -> output.line(new HypothesisJson(other).object()));
        } else {
            hypothesis.ifPresent(
                    other -> new HypothesisText(other, asIf).lines().forEach(output::line));
            new ReplayText(replay).lines().forEach(output::line);
        }
        output.problems(replay.rejections().problems(input.name()));
        return ExitCode.FINE;
    }

    private ReplayInput input() throws BadInputException {
        if ((file == null) == (config == null)) {
            throw refused("where the events are", "either --events FILE with --plans DIR, or --config FILE");
        }
        if (file != null) {
            if (directory == null || from != null || to != null || sealOpen) {
                throw refused("what goes with --events", "--plans DIR, and neither --from, --to nor --seal-open");
            }
            Duration skew = maxSkew == null ? Duration.ofMinutes(5) : maxSkew;
            CountSettings settings = new CountSettings(skew, IDLE_AFTER, Replay.UNIT_KEY);
            return new EventFile(directory, file, partitions == null ? 1 : partitions, settings);
        }
        if (partitions != null || maxSkew != null) {
            throw refused("what goes with --config", "neither --partitions nor --max-skew, which it says itself");
        }
        ServiceConfig service = new ConfigReader(environment).read(config).orElseThrow();
        return new InputTopics(
                service,
                Optional.ofNullable(directory),
                from == null ? start(service) : from,
                to == null ? new LogBound.Edge() : to,
                sealOpen,
                brokers);
    }

    /** Where a service begins that starts with the end is not written anywhere, so that the oldest record has to do. */
    private static LogBound start(ServiceConfig service) {
        return service.input().start() instanceof InputStart.At at ? new LogBound.At(at.time()) : new LogBound.Edge();
    }

    private static BadInputException refused(String found, String expected) {
        return new BadInputException(List.of(Problem.of("", found, expected, "")));
    }

    private static final class Partitions implements ITypeConverter<Integer> {
        @Override
        public Integer convert(String text) {
            ScalarType<Integer> type = ScalarType.wholeNumber(1, MAX_PARTITIONS);
            return type.parse().apply(text).orElseThrow(() -> refusal(text, type));
        }
    }

    private static final class Skew implements ITypeConverter<Duration> {
        @Override
        public Duration convert(String text) {
            ScalarType<Duration> type = ScalarType.duration(Duration.ZERO, Duration.ofDays(1));
            return type.parse().apply(text).orElseThrow(() -> refusal(text, type));
        }
    }

    private static final class Bound implements ITypeConverter<LogBound> {
        @Override
        public LogBound convert(String text) {
            return LogBounds.parse(text)
                    .orElseThrow(() -> new TypeConversionException(text + " (expected: " + LogBounds.EXPECTED + ")"));
        }
    }

    private static TypeConversionException refusal(String text, ScalarType<?> type) {
        return new TypeConversionException(text + " (expected: " + type.expected() + ")");
    }
}
