package io.tallyward.service.command;

import com.fasterxml.jackson.databind.node.ArrayNode;
import com.fasterxml.jackson.databind.node.ObjectNode;
import io.tallyward.engine.plan.Plan;
import io.tallyward.service.config.ConfigReader;
import io.tallyward.service.config.ServiceConfig;
import io.tallyward.service.config.document.BadInputException;
import io.tallyward.service.config.document.Checked;
import io.tallyward.service.plan.PlanDirectory;
import java.nio.file.Path;
import java.time.InstantSource;
import java.util.List;
import java.util.Map;
import picocli.CommandLine.Command;
import picocli.CommandLine.Option;

/** Says everything that would keep the service from running. */
@Command(
        name = "check",
        description = "Check configuration, plans and broker, and report all problems at once.",
        mixinStandardHelpOptions = true,
        exitCodeListHeading = ExitCode.HEADING,
        exitCodeList = {
            "0:Nothing is wrong.",
            "2:An argument, the configuration or a plan cannot be used, or a plan would be refused.",
            "3:The broker does not answer or refuses, or an input topic is not as it has to be."
        })
final class CheckCommand extends CommandBase {

    private final Map<String, String> environment;
    private final BookCheck.Brokers brokers;
    private final InstantSource clock;

    @Option(names = "--config", required = true, paramLabel = "FILE", description = "The configuration file.")
    private Path file;

    @Option(names = "--no-broker", description = "Do not contact the broker.")
    private boolean withoutBroker;

    CheckCommand(Map<String, String> environment, BookCheck.Brokers brokers, InstantSource clock) {
        this.environment = environment;
        this.brokers = brokers;
        this.clock = clock;
    }

    @Override
    ExitCode run(Output output) throws BadInputException {
        ServiceConfig config = new ConfigReader(environment).read(file).orElseThrow();
        Checked<List<Plan>> plans = PlanDirectory.read(config.plans());
        BrokerCheck broker = withoutBroker ? BrokerCheck.SKIPPED : BrokerCheck.of(config, brokers.lookup());
        if (!plans.problems().isEmpty()) {
            output.problems(plans.problems());
            broker.problems().forEach(output::problem);
            return ExitCode.BAD_INPUT;
        }
        BookCheck book = withoutBroker || !broker.problems().isEmpty()
                ? BookCheck.SKIPPED
                : BookCheck.of(config, plans.orElseThrow(), brokers, clock.instant());
        report(output, config, plans.orElseThrow(), broker, book);
        broker.problems().forEach(output::problem);
        if (!book.problems().isEmpty()) {
            output.problems(book.problems());
            return book.standings().isEmpty() ? ExitCode.BROKEN_SURROUNDINGS : ExitCode.BAD_INPUT;
        }
        return broker.problems().isEmpty() ? ExitCode.FINE : ExitCode.BROKEN_SURROUNDINGS;
    }

    private void report(Output output, ServiceConfig config, List<Plan> plans, BrokerCheck broker, BookCheck book) {
        List<String> experiments = plans.stream().map(Plan::experiment).toList();
        if (output.json()) {
            ObjectNode object = Output.typed("check").put("config", file.toString());
            ArrayNode names = object.putArray("experiments");
            experiments.forEach(names::add);
            object.put("brokerChecked", !withoutBroker);
            ObjectNode topics = object.putObject("topics");
            broker.partitions().forEach(topics::put);
            ObjectNode standings = object.putObject("book");
            book.standings().forEach(standings::put);
            object.put("problems", broker.problems().size() + book.problems().size());
            output.line(object);
            return;
        }
        output.line("configuration  fine: " + file);
        output.line("plans          fine: " + String.join(", ", experiments));
        output.line("broker         " + broker(config, broker));
        if (book.asked()) {
            output.line("book of plans  " + book.text());
        }
    }

    private String broker(ServiceConfig config, BrokerCheck broker) {
        if (withoutBroker) {
            return "not asked";
        }
        return broker.problems().isEmpty() ? "fine: " + topics(config, broker) : "not as it has to be";
    }

    private static String topics(ServiceConfig config, BrokerCheck broker) {
        int partitions = broker.partitions().values().iterator().next();
        return config.kafka().bootstrapServers() + ", "
                + String.join(", ", config.input().topics()) + " with " + partitions
                + (partitions == 1 ? " partition" : " partitions");
    }
}
