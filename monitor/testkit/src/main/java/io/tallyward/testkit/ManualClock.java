package io.tallyward.testkit;

import java.time.Clock;
import java.time.Duration;
import java.time.Instant;
import java.time.ZoneId;
import java.time.ZoneOffset;
import java.util.Objects;
import java.util.concurrent.atomic.AtomicReference;

/** A clock that stands still until the test moves it. In UTC unless asked for another zone; thread-safe. */
public final class ManualClock extends Clock {

    private final AtomicReference<Instant> now;
    private final ZoneId zone;

    private ManualClock(AtomicReference<Instant> now, ZoneId zone) {
        this.now = now;
        this.zone = zone;
    }

    /** A clock that shows the given instant. */
    public static ManualClock at(Instant start) {
        return new ManualClock(new AtomicReference<>(Objects.requireNonNull(start, "start")), ZoneOffset.UTC);
    }

    /** A clock that shows the given RFC 3339 time. */
    public static ManualClock at(String start) {
        return at(Instant.parse(start));
    }

    /** Moves the clock; a negative duration sets it back, as clocks sometimes are. */
    public void advance(Duration step) {
        now.updateAndGet(instant -> instant.plus(step));
    }

    /** Sets the clock. */
    public void set(Instant instant) {
        now.set(Objects.requireNonNull(instant, "instant"));
    }

    @Override
    public Instant instant() {
        return now.get();
    }

    @Override
    public ZoneId getZone() {
        return zone;
    }

    /** The same clock in another zone: moving one moves both. */
    @Override
    public Clock withZone(ZoneId other) {
        return new ManualClock(now, other);
    }
}
