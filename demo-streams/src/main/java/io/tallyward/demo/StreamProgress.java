package io.tallyward.demo;

import io.tallyward.demo.story.Northwater;
import io.tallyward.demo.story.StreamEvent;
import java.time.Duration;
import java.util.Locale;
import java.util.function.LongSupplier;

/**
 * Tells how far the stream is: days that have passed, events sent and their rate. Every full day is worth a line of its
 * own; the few hours of the stream after the last day belong to none. Not thread-safe.
 */
final class StreamProgress {

    /** Days of the scenario. */
    static final long DAYS = Duration.between(Northwater.START, Northwater.END).toDays();

    private static final long INTERVAL_NANOS = Duration.ofMillis(250).toNanos();

    private final int events;
    private final Screen screen;
    private final LongSupplier nanoTime;
    private final long startNanos;
    private long toldNanos;
    private long toldDays;

    /**
     * Starts the clock.
     *
     * @param events how many there are in all
     * @param nanoTime a clock that never goes back, in nanoseconds
     */
    StreamProgress(int events, Screen screen, LongSupplier nanoTime) {
        this.events = events;
        this.screen = screen;
        this.nanoTime = nanoTime;
        startNanos = nanoTime.getAsLong();
        toldNanos = startNanos;
    }

    void sent(StreamEvent event, long count) {
        long days = Duration.ofMillis(event.receivedMillis() - Northwater.START.toEpochMilli())
                .toDays();
        long now = nanoTime.getAsLong();
        boolean step = days > toldDays;
        if (days == 0 || !step && now - toldNanos < INTERVAL_NANOS) {
            return;
        }
        double seconds = Math.max(1e-3, (now - startNanos) / 1e9);
        String when = step || days == DAYS ? "after day " + days : "in day " + (days + 1);
        screen.progress(
                String.format(
                        Locale.ROOT, "  %-12s  %,9d of %,d events  %,7.0f/s", when, count, events, count / seconds),
                step);
        toldNanos = now;
        toldDays = days;
    }
}
