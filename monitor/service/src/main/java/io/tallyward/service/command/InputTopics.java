package io.tallyward.service.command;

import io.tallyward.connector.format.PlanEntryJson;
import io.tallyward.connector.kafka.LogBound;
import io.tallyward.engine.count.CountSettings;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.PlanBook;
import io.tallyward.service.config.InputConfig;
import io.tallyward.service.config.ServiceConfig;
import io.tallyward.service.config.document.BadInputException;
import io.tallyward.service.config.document.Problem;
import io.tallyward.service.plan.PlanDirectory;
import java.nio.file.Path;
import java.util.List;
import java.util.Map;
import java.util.Optional;
import java.util.function.Consumer;

/** The input topics of a service and its book of plans, read as they lie there: nothing is written, no group is joined. */
final class InputTopics implements ReplayInput {

    private final ServiceConfig config;
    private final Optional<Path> directory;
    private final LogBound from;
    private final LogBound to;
    private final boolean seal;
    private final Brokers brokers;

    /** How brokers are asked. */
    record Brokers(TopicLookup lookup, TopicReading reading, InputReading inputs) {}

    /**
     * The input of a service.
     *
     * @param directory plan files to use instead of the book of plans
     * @param from where to begin in each partition
     * @param to where to end in each partition
     * @param seal whether windows that are open at the end are sealed, as those of a file are
     */
    InputTopics(
            ServiceConfig config, Optional<Path> directory, LogBound from, LogBound to, boolean seal, Brokers brokers) {
        this.config = config;
        this.directory = directory;
        this.from = from;
        this.to = to;
        this.seal = seal;
        this.brokers = brokers;
    }

    @Override
    public List<Plan> plans() throws BadInputException {
        return directory.isPresent() ? PlanDirectory.read(directory.get()).orElseThrow() : book();
    }

    private List<Plan> book() throws BadInputException {
        PlanBook book = new PlanBook();
        Consumer<byte[]> entries = value -> book.take(PlanEntryJson.read(value));
        String topic = config.name() + "-plans";
        brokers.reading().read(BrokerCheck.clientProperties(config), topic, entries);
        if (book.entries().isEmpty()) {
            throw new BadInputException(List.of(Problem.of(
                    "topic " + topic, "no plan", "a book of plans", "Name a directory of plan files with --plans.")));
        }
        return book.entries().values().stream().map(PlanBook.Entry::plan).toList();
    }

    @Override
    public Replay replay(List<Plan> plans) throws SurroundingsException {
        BrokerCheck check = BrokerCheck.of(config, brokers.lookup());
        if (!check.problems().isEmpty()) {
            throw new SurroundingsException(String.join("; ", check.problems()));
        }
        InputConfig input = config.input();
        int partitions = check.partitions().get(input.topics().get(0));
        CountSettings settings = new CountSettings(input.maxSkew(), input.idleAfter(), Replay.UNIT_KEY);
        return new Replay(plans, partitions, input.topics(), settings, input.mapping(), input.maxEventBytes());
    }

    @Override
    public void feed(List<Replay> replays) {
        List<String> topics = config.input().topics();
        Map<String, String> properties = BrokerCheck.clientProperties(config);
        brokers.inputs()
                .read(
                        properties,
                        topics,
                        from,
                        to,
                        record -> replays.forEach(replay -> replay.take(record, topics.indexOf(record.topic()))));
        replays.forEach(seal ? Replay::seal : Replay::finish);
    }

    @Override
    public String name() {
        return "topics " + String.join(", ", config.input().topics());
    }
}
