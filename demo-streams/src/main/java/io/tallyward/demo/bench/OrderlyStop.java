package io.tallyward.demo.bench;

import java.time.Duration;
import java.util.concurrent.CountDownLatch;
import java.util.concurrent.TimeUnit;

/**
 * Lets a measurement that is stopped by a signal end its processes and remove its files before its own process ends: the
 * measuring thread is interrupted, and the end waits until {@link #close}. Thread-safe.
 */
final class OrderlyStop implements AutoCloseable {

    /** A broker may take a quarter of a minute to stop. */
    private static final Duration PATIENCE = Duration.ofSeconds(40);

    private final CountDownLatch ended = new CountDownLatch(1);
    private final Thread measuring;
    private volatile boolean happened;

    private OrderlyStop(Thread measuring) {
        this.measuring = measuring;
    }

    /** Listens on behalf of the current thread until closed. */
    static OrderlyStop listen() {
        OrderlyStop stop = new OrderlyStop(Thread.currentThread());
        Runtime.getRuntime().addShutdownHook(new Thread(stop::stop, "bench-stop"));
        return stop;
    }

    /** Whether a failure is but a consequence of being stopped. */
    boolean happened() {
        return happened;
    }

    /** What the signal leads to; nothing once the measurement has ended by itself. */
    void stop() {
        if (ended.getCount() == 0) {
            return;
        }
        happened = true;
        measuring.interrupt();
        try {
            if (!ended.await(PATIENCE.toMillis(), TimeUnit.MILLISECONDS)) {
                System.err.println("bench: not stopped after " + PATIENCE.toSeconds() + " s; files may be left behind");
            }
        } catch (InterruptedException hurry) {
            Thread.currentThread().interrupt();
        }
    }

    @Override
    public void close() {
        ended.countDown();
    }
}
