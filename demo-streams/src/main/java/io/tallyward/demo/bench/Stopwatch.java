package io.tallyward.demo.bench;

import com.sun.management.OperatingSystemMXBean;
import java.lang.management.ManagementFactory;

/**
 * Measures a process from inside, once it is warm: its CPU time, user and system of all threads (those of the compiler and
 * the collector included), between two numbers of events. Not thread-safe.
 */
final class Stopwatch {

    private static final double NANOS_PER_SECOND = 1e9;

    private final OperatingSystemMXBean system = (OperatingSystemMXBean) ManagementFactory.getOperatingSystemMXBean();
    private final long warmUpEvents;
    private boolean running;
    private long cpuNanos;
    private long wallNanos;
    private long firstEvent;

    /** @param warmUpEvents events before measuring begins */
    Stopwatch(long warmUpEvents) {
        this.warmUpEvents = warmUpEvents;
    }

    /** Tells how many events have been dealt with so far. */
    void passed(long events) {
        if (!running && events >= warmUpEvents) {
            running = true;
            firstEvent = events;
            cpuNanos = system.getProcessCpuTime();
            wallNanos = System.nanoTime();
        }
    }

    /** What it took from the end of the warm-up until now. */
    Measurement stop(long events) {
        if (!(running && events > firstEvent)) {
            throw new IllegalStateException("events: " + events + " (expected: more than the warm-up of " + warmUpEvents
                    + "); ask for more events");
        }
        return new Measurement(
                events - firstEvent,
                (system.getProcessCpuTime() - cpuNanos) / NANOS_PER_SECOND,
                (System.nanoTime() - wallNanos) / NANOS_PER_SECOND);
    }
}
