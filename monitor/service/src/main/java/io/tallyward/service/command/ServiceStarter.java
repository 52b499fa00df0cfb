package io.tallyward.service.command;

import io.tallyward.engine.plan.Plan;
import io.tallyward.service.config.ServiceConfig;
import java.util.List;

/** Starts the service; the command line knows nothing else of it. */
@FunctionalInterface
public interface ServiceStarter {

    /**
     * Starts the service and returns once it runs. Closing the result stops it gracefully; when closing throws, the
     * command ends with {@link ExitCode#BROKEN_SURROUNDINGS} and shows the message.
     *
     * @throws SurroundingsException when a broker, a port or the like is not as it has to be
     * @throws Exception on anything else that keeps the service from running; its message is shown
     */
    AutoCloseable start(ServiceConfig config, List<Plan> plans) throws Exception;
}
