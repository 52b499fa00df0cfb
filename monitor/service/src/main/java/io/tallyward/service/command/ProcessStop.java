package io.tallyward.service.command;

import java.time.Duration;
import java.util.OptionalInt;
import java.util.concurrent.CountDownLatch;
import java.util.concurrent.TimeUnit;

/**
 * The stop signal of a process: SIGTERM or Ctrl-C. The signal starts the end of the virtual machine, which this holds back
 * until the command has ended by itself, so that a graceful stop ends with the command's own exit status.
 */
public final class ProcessStop implements StopSignal {

    /** Longer than commits and a last delivery take; an orchestrator's patience commonly is 30 seconds. */
    private static final Duration PATIENCE = Duration.ofSeconds(25);

    private final CountDownLatch told = new CountDownLatch(1);
    private final CountDownLatch ended = new CountDownLatch(1);
    private volatile boolean awaited;
    private volatile int status;

    /** Listens from now on to the signals that end the process. */
    public static ProcessStop listen() {
        ProcessStop stop = new ProcessStop();
        Runtime.getRuntime().addShutdownHook(new Thread(stop::hold, "stop"));
        return stop;
    }

    @Override
    public void await() throws InterruptedException {
        awaited = true;
        told.await();
    }

    /** Asks the command to stop without a signal, as when the service finds that it cannot go on. */
    public void request() {
        told.countDown();
    }

    /** Says that the command has ended, and with which status; called by the main thread as the last thing. */
    public void ended(int exitStatus) {
        status = exitStatus;
        ended.countDown();
    }

    /** Holds the end of the process back; the status of the command, empty when nothing waited or it did not end. */
    OptionalInt holdUntilEnded(Duration patience) {
        told.countDown();
        if (!awaited) {
            return OptionalInt.empty();
        }
        try {
            boolean inTime = ended.await(patience.toMillis(), TimeUnit.MILLISECONDS);
            return inTime ? OptionalInt.of(status) : OptionalInt.empty();
        } catch (InterruptedException e) {
            Thread.currentThread().interrupt();
            return OptionalInt.empty();
        }
    }

    private void hold() {
        holdUntilEnded(PATIENCE).ifPresent(Runtime.getRuntime()::halt);
    }
}
