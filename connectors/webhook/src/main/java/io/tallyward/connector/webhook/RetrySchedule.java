package io.tallyward.connector.webhook;

import java.time.Duration;
import java.util.List;
import java.util.SplittableRandom;

/**
 * When a notice is tried again.
 *
 * @param delays the wait before the first attempt, the second, and so on; there are as many attempts as delays, at least
 *     one
 * @param jitter by how much a wait may be drawn out at random, as a proportion of it, at least 0: receivers that come back
 *     are not met by everything at once
 * @param seed of the jitter; with the same seed a notice has the same waits
 */
public record RetrySchedule(List<Duration> delays, double jitter, long seed) {

    /** The example of the Standard Webhooks specification: ten attempts over a little more than three days. */
    private static final List<Duration> STANDARD_DELAYS = List.of(
            Duration.ZERO,
            Duration.ofSeconds(5),
            Duration.ofMinutes(5),
            Duration.ofMinutes(30),
            Duration.ofHours(2),
            Duration.ofHours(5),
            Duration.ofHours(10),
            Duration.ofHours(14),
            Duration.ofHours(20),
            Duration.ofHours(24));

    /** A fifth spreads a minute over five minutes' wait, and moves the end of the schedule by half a day at most. */
    private static final double STANDARD_JITTER = 0.2;

    public RetrySchedule {
        delays = List.copyOf(delays);
        if (delays.isEmpty() || delays.stream().anyMatch(Duration::isNegative)) {
            throw new IllegalArgumentException("retry delays: " + delays + " (expected: at least one, none negative)");
        }
        if (!(jitter >= 0 && jitter <= 1)) {
            throw new IllegalArgumentException("retry jitter: " + jitter + " (expected: 0 to 1)");
        }
    }

    /** Ten attempts over about three days. */
    public static RetrySchedule standard(long seed) {
        return new RetrySchedule(STANDARD_DELAYS, STANDARD_JITTER, seed);
    }

    /** The same attempts with all waits multiplied: a demonstration has no three days. */
    public RetrySchedule scaled(double factor) {
        if (!(factor >= 0 && factor <= 1000)) {
            throw new IllegalArgumentException("retry scale: " + factor + " (expected: 0 to 1000)");
        }
        List<Duration> scaled =
                delays.stream().map(delay -> multiplied(delay, factor)).toList();
        return new RetrySchedule(scaled, jitter, seed);
    }

    /** How many attempts there are. */
    public int attempts() {
        return delays.size();
    }

    /**
     * The wait before an attempt, from {@code 1} to {@code 1 + jitter} times its delay.
     *
     * @param id identity of the notice; every notice has its own jitter
     * @param attempt 1 for the first
     */
    public Duration delayBefore(String id, int attempt) {
        long own = seed ^ ((long) id.hashCode() << 32) ^ attempt;
        return multiplied(delays.get(attempt - 1), 1 + jitter * new SplittableRandom(own).nextDouble());
    }

    private static Duration multiplied(Duration delay, double factor) {
        return Duration.ofMillis(Math.round(delay.toMillis() * factor));
    }
}
