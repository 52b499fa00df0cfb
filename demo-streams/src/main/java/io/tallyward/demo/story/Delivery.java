package io.tallyward.demo.story;

import java.time.Duration;
import java.util.SplittableRandom;

/**
 * How long an event is under way. A monitor that allows ten minutes of grace after the thirty minutes of attribution has
 * an event's windows still open when it takes eight minutes, even if another clock in the same partition runs a minute and
 * a half ahead; and has them sealed for hours when it takes three hours, because no partition is ever silent that long.
 */
enum Delivery {
    /** Within five seconds. */
    PROMPT(50, 5_000),
    /** Six to eight minutes: out of order, within grace. */
    SLOW(Duration.ofMinutes(6).toMillis(), Duration.ofMinutes(8).toMillis()),
    /** Three to six hours: too late by any reckoning. */
    LATE(Duration.ofHours(3).toMillis(), Duration.ofHours(6).toMillis()),
    /** The emitter's clock is up to ninety seconds ahead, which is tolerated. */
    FAST_CLOCK(-90_000, -1_000),
    /** Prompt, but up to eight minutes for three in a hundred. */
    USUAL(50, Duration.ofMinutes(8).toMillis()) {
        @Override
        long delayMillis(SplittableRandom random) {
            return random.nextDouble() < 0.03 ? super.delayMillis(random) : PROMPT.delayMillis(random);
        }
    };

    private final long leastMillis;
    private final long mostMillis;

    Delivery(long leastMillis, long mostMillis) {
        this.leastMillis = leastMillis;
        this.mostMillis = mostMillis;
    }

    long mostMillis() {
        return mostMillis;
    }

    long delayMillis(SplittableRandom random) {
        return random.nextLong(leastMillis, mostMillis);
    }
}
