package io.tallyward.service.command;

import io.tallyward.connector.format.EventMapping;
import io.tallyward.engine.count.CountSettings;
import io.tallyward.engine.plan.Plan;
import io.tallyward.service.config.document.BadInputException;
import io.tallyward.service.config.document.DocumentReader;
import io.tallyward.service.config.document.Problem;
import io.tallyward.service.plan.PlanDirectory;
import java.io.IOException;
import java.nio.file.Files;
import java.nio.file.Path;
import java.util.List;
import java.util.Optional;

/**
 * A file of events, one JSON document per line, in the order they were received, and a directory of plans.
 *
 * @param directory the directory of the plan files
 * @param file the events
 * @param partitions as many the events are counted in
 * @param settings settings of the stream
 */
record EventFile(Path directory, Path file, int partitions, CountSettings settings) implements ReplayInput {

    @Override
    public List<Plan> plans() throws BadInputException {
        return PlanDirectory.read(directory).orElseThrow();
    }

    @Override
    public Replay replay(List<Plan> plans) {
        return new Replay(plans, partitions, List.of("events"), settings, EventMapping.DEFAULT, Replay.MAX_EVENT_BYTES);
    }

    /** There is nothing behind a file, so everything is sealed at its end. */
    @Override
    public void feed(List<Replay> replays) throws BadInputException {
        if (Files.isDirectory(file)) {
            throw unreadable("a directory");
        }
        try (EventLines lines = new EventLines(Files.newInputStream(file), Replay.MAX_EVENT_BYTES)) {
            for (Optional<byte[]> line = lines.next(); line.isPresent(); line = lines.next()) {
                byte[] value = line.get();
                replays.forEach(replay -> replay.take(value, name(), lines.number()));
            }
        } catch (IOException e) {
            throw unreadable("cannot be read: " + DocumentReader.reason(e));
        }
        replays.forEach(Replay::seal);
    }

    @Override
    public String name() {
        return file.toString();
    }

    private BadInputException unreadable(String found) {
        return new BadInputException(
                List.of(Problem.of(name(), found, "a file of events, one JSON document per line", "")));
    }
}
