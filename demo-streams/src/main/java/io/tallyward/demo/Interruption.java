package io.tallyward.demo;

import java.time.Duration;
import java.util.concurrent.CountDownLatch;
import java.util.concurrent.TimeUnit;

/**
 * Ctrl-C or SIGTERM while the demo runs. It is answered at once; then everything is stopped without much patience, the
 * thread of the demo is interrupted, and the working directory goes last, when nobody writes to it any more. Thread-safe.
 */
final class Interruption implements AutoCloseable {

    /** Enough for a thread that waits or writes a file; one that computes is left behind, as it leaves no trace. */
    private static final Duration PATIENCE = Duration.ofSeconds(1);

    private final Screen screen;
    private final Runnable stopInHurry;
    private final WorkDirectory directory;
    private final Thread main;
    private final CountDownLatch ended = new CountDownLatch(1);
    private volatile boolean happened;

    private Interruption(Screen screen, Runnable stopInHurry, WorkDirectory directory, Thread main) {
        this.screen = screen;
        this.stopInHurry = stopInHurry;
        this.directory = directory;
        this.main = main;
    }

    /**
     * Listens from now on, on behalf of the current thread; closing says that this thread has nothing left to stop.
     *
     * @param stopInHurry stops everything that was started; called on another thread
     */
    static Interruption listen(Screen screen, Runnable stopInHurry, WorkDirectory directory) {
        Interruption interruption = new Interruption(screen, stopInHurry, directory, Thread.currentThread());
        Runtime.getRuntime().addShutdownHook(new Thread(interruption::stop, "demo-stop"));
        return interruption;
    }

    /** Whether a failure is but a consequence of being stopped. */
    boolean happened() {
        return happened;
    }

    @Override
    public void close() {
        ended.countDown();
    }

    /** What the signal leads to; nothing once the demo has ended by itself. */
    void stop() {
        if (ended.getCount() == 0) {
            return;
        }
        happened = true;
        screen.lastLine("stopping ...");
        main.interrupt();
        stopInHurry.run();
        try {
            ended.await(PATIENCE.toMillis(), TimeUnit.MILLISECONDS);
            directory.close();
        } catch (InterruptedException e) {
            Thread.currentThread().interrupt();
        } catch (RuntimeException failure) {
            screen.alert(failure.getMessage());
        }
    }
}
