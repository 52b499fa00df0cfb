package io.tallyward.connector.kafka;

import java.time.Duration;

/** Pauses between attempts: a quarter of a second, doubling up to ten seconds. */
final class Backoff {

    static final Duration FIRST = Duration.ofMillis(250);
    static final Duration LONGEST = Duration.ofSeconds(10);

    private Duration next = FIRST;

    /** How long to pause now. */
    Duration pause() {
        Duration pause = next;
        next = next.multipliedBy(2).compareTo(LONGEST) > 0 ? LONGEST : next.multipliedBy(2);
        return pause;
    }

    void reset() {
        next = FIRST;
    }
}
