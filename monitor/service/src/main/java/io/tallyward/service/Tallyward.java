package io.tallyward.service;

import io.tallyward.connector.kafka.CommittedTopic;
import io.tallyward.connector.kafka.InputLog;
import io.tallyward.connector.kafka.InternalTopics;
import io.tallyward.engine.plan.LateAmendmentException;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.PlanChangedException;
import io.tallyward.engine.shard.RefusedStateException;
import io.tallyward.service.command.CommandLineFactory;
import io.tallyward.service.command.ProcessStop;
import io.tallyward.service.command.SurroundingsException;
import io.tallyward.service.config.ServiceConfig;
import io.tallyward.service.config.document.BadInputException;
import io.tallyward.service.config.document.Problem;
import io.tallyward.service.watch.WatchService;
import java.io.UncheckedIOException;
import java.util.List;
import java.util.concurrent.atomic.AtomicReference;

/** The program. */
public final class Tallyward {

    private Tallyward() {}

    /** Runs one command and ends the process with its exit status. */
    public static void main(String[] arguments) {
        ProcessStop stop = ProcessStop.listen();
        int status = CommandLineFactory.of(
                        System.getenv(),
                        (config, plans) -> start(config, plans, stop),
                        InternalTopics::partitions,
                        CommittedTopic::read,
                        InputLog::read,
                        stop)
                .execute(arguments);
        stop.ended(status);
        System.exit(status);
    }

    /** Starts the service so that a broken invariant stops the process, and is what closing then throws. */
    private static AutoCloseable start(ServiceConfig config, List<Plan> plans, ProcessStop stop)
            throws SurroundingsException {
        AtomicReference<Exception> failure = new AtomicReference<>();
        try {
            WatchService service = WatchService.start(config, plans, CommandLineFactory.version(), (group, cause) -> {
                failure.compareAndSet(null, explain(config, group, cause));
                stop.request();
            });
            return () -> {
                service.close();
                if (failure.get() != null) {
                    throw failure.get();
                }
            };
        } catch (UncheckedIOException e) {
            throw new SurroundingsException(e.getMessage(), e);
        }
    }

    /** State that does not go with the settings is a mistake in the input; whatever else fails lies in the surroundings. */
    private static Exception explain(ServiceConfig config, String group, Throwable failure) {
        for (Throwable cause = failure; cause != null; cause = cause.getCause()) {
            if (cause instanceof RefusedStateException) {
                String where = cause instanceof PlanChangedException || cause instanceof LateAmendmentException
                        ? config.plans().toString()
                        : config.file().toString();
                return new BadInputException(List.of(Problem.of(where, cause.getMessage(), "", "")));
            }
        }
        return new SurroundingsException("The service stops because " + group
                + " cannot go on, and nothing of the failed step was committed: " + failure.getMessage());
    }
}
