package io.tallyward.engine.plan;

import java.time.Duration;
import java.time.Instant;

/**
 * When an experiment runs, in event time.
 *
 * @param from first moment whose events count; aligned to a window
 * @param atLeast no benefit is declared before this much of the run has passed; zero when the plan sets no minimum
 * @param atMost length of the run; events at or after its end are outside
 */
public record Run(Instant from, Duration atLeast, Duration atMost) {

    /** The first moment that is no longer part of the run. */
    public Instant end() {
        return from.plus(atMost);
    }

    /** Whether an event time lies in the run: closed at the start, open at the end. */
    public boolean contains(long atMillis) {
        long elapsedMillis = atMillis - from.toEpochMilli();
        return elapsedMillis >= 0 && elapsedMillis < atMost.toMillis();
    }
}
