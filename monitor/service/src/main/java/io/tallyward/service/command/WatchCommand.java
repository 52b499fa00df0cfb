package io.tallyward.service.command;

import com.fasterxml.jackson.databind.node.ArrayNode;
import com.fasterxml.jackson.databind.node.ObjectNode;
import io.tallyward.engine.plan.Plan;
import io.tallyward.service.config.ConfigReader;
import io.tallyward.service.config.ServiceConfig;
import io.tallyward.service.config.document.BadInputException;
import io.tallyward.service.plan.PlanDirectory;
import java.nio.file.Path;
import java.util.List;
import java.util.Map;
import picocli.CommandLine.Command;
import picocli.CommandLine.Option;

/** The service. */
@Command(
        name = "watch",
        description = "Run the service until it is told to stop (SIGTERM or Ctrl-C).",
        mixinStandardHelpOptions = true,
        exitCodeListHeading = ExitCode.HEADING,
        exitCodeList = {
            "0:It was told to stop, and stopped in good order.",
            "2:An argument, the configuration or a plan cannot be used, or contradicts what was counted under it before.",
            "3:A broker, a port or something else around it is not as it has to be."
        })
final class WatchCommand extends CommandBase {

    private final Map<String, String> environment;
    private final ServiceStarter starter;
    private final StopSignal stop;

    @Option(names = "--config", required = true, paramLabel = "FILE", description = "The configuration file.")
    private Path file;

    WatchCommand(Map<String, String> environment, ServiceStarter starter, StopSignal stop) {
        this.environment = environment;
        this.starter = starter;
        this.stop = stop;
    }

    @Override
    ExitCode run(Output output) throws Exception {
        ServiceConfig config = new ConfigReader(environment).read(file).orElseThrow();
        List<Plan> plans = usablePlans(config);
        AutoCloseable service = starter.start(config, plans);
        try {
            say(output, "watching", plans);
            stop.await();
        } finally {
            service.close();
        }
        say(output, "stopped", plans);
        return ExitCode.FINE;
    }

    /** A file that cannot be used is told about while the service runs; only where none can, there is nothing to start with. */
    private static List<Plan> usablePlans(ServiceConfig config) throws BadInputException {
        List<Plan> usable = PlanDirectory.readUsable(config.plans()).plans();
        return usable.isEmpty() ? PlanDirectory.read(config.plans()).orElseThrow() : usable;
    }

    private static void say(Output output, String state, List<Plan> plans) {
        List<String> experiments = plans.stream().map(Plan::experiment).toList();
        if (output.json()) {
            ObjectNode object = Output.typed(state);
            ArrayNode names = object.putArray("experiments");
            experiments.forEach(names::add);
            output.line(object);
        } else {
            output.line(state + " " + String.join(", ", experiments));
        }
    }
}
