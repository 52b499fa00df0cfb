package io.tallyward.service.command;

import io.tallyward.engine.count.CountSettings;
import io.tallyward.engine.plan.Plan;
import io.tallyward.service.config.document.BadInputException;
import io.tallyward.service.config.document.DocumentReader;
import io.tallyward.service.config.document.Problem;
import io.tallyward.service.config.document.ScalarType;
import io.tallyward.service.plan.PlanDirectory;
import java.io.IOException;
import java.nio.charset.StandardCharsets;
import java.nio.file.Files;
import java.nio.file.Path;
import java.time.Duration;
import java.util.List;
import java.util.Optional;
import picocli.CommandLine.Command;
import picocli.CommandLine.ITypeConverter;
import picocli.CommandLine.Option;
import picocli.CommandLine.TypeConversionException;

/** Counts and decides over a file of events. */
@Command(
        name = "replay",
        description = "Count and decide over a file of events, as the service would, without side effects.",
        mixinStandardHelpOptions = true,
        exitCodeListHeading = ExitCode.HEADING,
        exitCodeList = {
            "0:The file was read to its end; rejected records are told and change nothing here.",
            "2:An argument, a plan or the file of events cannot be used.",
            "3:Something unforeseen happened."
        })
final class ReplayCommand extends CommandBase {

    private static final int MAX_PARTITIONS = 4_096;

    /** A replay forgets its units at its end, so their hash needs no secret. */
    private static final byte[] UNIT_KEY = "replay".getBytes(StandardCharsets.UTF_8);

    /** Nothing is idle in a replay; any length will do. */
    private static final Duration IDLE_AFTER = Duration.ofDays(1);

    @Option(names = "--plans", required = true, paramLabel = "DIR", description = "The directory of the plan files.")
    private Path directory;

    @Option(
            names = "--events",
            required = true,
            paramLabel = "FILE",
            description = "The events, one JSON document per line, in the order they were received.")
    private Path file;

    @Option(
            names = "--partitions",
            paramLabel = "N",
            defaultValue = "1",
            converter = Partitions.class,
            description = "Count as if the events came in this many partitions (default: ${DEFAULT-VALUE}).")
    private int partitions;

    @Option(
            names = "--max-skew",
            paramLabel = "DURATION",
            defaultValue = "PT5M",
            converter = Skew.class,
            description = "How far an event may lie ahead of the time in its member 'received', which stands for the "
                    + "timestamp of its record; not checked where there is none (default: ${DEFAULT-VALUE}).")
    private Duration maxSkew;

    @Override
    ExitCode run(Output output) throws BadInputException {
        List<Plan> plans = PlanDirectory.read(directory).orElseThrow();
        Replay replay = new Replay(plans, partitions, new CountSettings(maxSkew, IDLE_AFTER, UNIT_KEY));
        takeAll(replay);
        if (output.json()) {
            new ReplayJson(replay).writeTo(output);
        } else {
            new ReplayText(replay).lines().forEach(output::line);
        }
        output.problems(replay.rejections().problems(file));
        return ExitCode.FINE;
    }

    private void takeAll(Replay replay) throws BadInputException {
        if (Files.isDirectory(file)) {
            throw unreadable("a directory");
        }
        try (EventLines lines = new EventLines(Files.newInputStream(file), Replay.MAX_EVENT_BYTES)) {
            for (Optional<byte[]> line = lines.next(); line.isPresent(); line = lines.next()) {
                replay.take(line.get(), lines.number());
            }
        } catch (IOException e) {
            throw unreadable("cannot be read: " + DocumentReader.reason(e));
        }
        replay.end();
    }

    private BadInputException unreadable(String found) {
        return new BadInputException(
                List.of(Problem.of(file.toString(), found, "a file of events, one JSON document per line", "")));
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

    private static TypeConversionException refusal(String text, ScalarType<?> type) {
        return new TypeConversionException(text + " (expected: " + type.expected() + ")");
    }
}
