package io.tallyward.demo.stream;

import io.tallyward.demo.story.Northwater;
import java.time.Duration;
import java.util.function.LongSupplier;

/**
 * Maps the fourteen days to a number of seconds. Time is spent evenly over event time, so that the daily rhythm of the
 * traffic stays visible in the rate.
 */
public final class Pace {

    private final LongSupplier nanoTime;
    private final long startNanos;
    private final double nanosPerMilli;

    /**
     * Starts the clock.
     *
     * @param fourteenDays how long the fourteen days are to take; zero for as fast as possible
     * @param nanoTime a clock that never goes back, in nanoseconds
     */
    public Pace(Duration fourteenDays, LongSupplier nanoTime) {
        if (fourteenDays.isNegative()) {
            throw new IllegalArgumentException("fourteenDays: " + fourteenDays + " (expected: zero or more)");
        }
        this.nanoTime = nanoTime;
        startNanos = nanoTime.getAsLong();
        nanosPerMilli = (double) fourteenDays.toNanos()
                / Duration.between(Northwater.START, Northwater.END).toMillis();
    }

    /** How long to wait before an event that arrives at this moment may be sent; never negative. */
    public long waitNanos(long receivedMillis) {
        long due = Math.round((receivedMillis - Northwater.START.toEpochMilli()) * nanosPerMilli);
        return Math.max(0, due - (nanoTime.getAsLong() - startNanos));
    }
}
