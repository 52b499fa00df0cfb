package io.tallyward.service;

import io.tallyward.connector.kafka.InternalTopics;
import io.tallyward.engine.plan.Plan;
import io.tallyward.service.command.CommandLineFactory;
import io.tallyward.service.command.ProcessStop;
import io.tallyward.service.command.SurroundingsException;
import io.tallyward.service.config.ServiceConfig;
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
                        stop)
                .execute(arguments);
        stop.ended(status);
        System.exit(status);
    }

    /** Starts the service so that a broken invariant stops the process, and is what closing then throws. */
    private static AutoCloseable start(ServiceConfig config, List<Plan> plans, ProcessStop stop)
            throws SurroundingsException {
        AtomicReference<SurroundingsException> failure = new AtomicReference<>();
        try {
            WatchService service = WatchService.start(config, plans, CommandLineFactory.version(), (group, cause) -> {
                failure.compareAndSet(
                        null,
                        new SurroundingsException("The service stops because " + group
                                + " cannot go on, and nothing of the failed step was committed: "
                                + cause.getMessage()));
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
}
