package io.tallyward.connector.kafka;

import java.time.Duration;

/** Intervals on a clock that may be set back. */
final class Elapsed {

    private Elapsed() {}

    /** Whether an interval has passed; also true when the clock stands before its start, so that nothing waits for it. */
    static boolean since(long startMillis, long nowMillis, Duration interval) {
        return nowMillis < startMillis || nowMillis - startMillis >= interval.toMillis();
    }
}
