package io.tallyward.demo.story;

import java.time.Duration;
import java.time.Instant;

/** The times of the scenario, shared by its stories and by the plan files beside this class. */
public final class Northwater {

    /** Start of every run, and of the stream. */
    public static final Instant START = Instant.parse("2026-05-04T00:00:00Z");

    /** End of the fourteen days: every run but that of the deck map ends here. */
    public static final Instant END = START.plus(Duration.ofDays(14));

    /** After this moment only single first views of the deck map arrive; everything else has been delivered. */
    public static final Instant QUIET_FROM = END.plus(Duration.ofMinutes(30));

    /** End of the stream: late enough for the last window of the fourteen days to be sealed by event time alone. */
    public static final Instant STREAM_END = END.plus(Duration.ofHours(3));

    /** How long after a first exposure a click counts; both ends included. */
    public static final Duration ATTRIBUTION = Duration.ofMinutes(30);

    /** How much disorder the plans allow for. */
    public static final Duration GRACE = Duration.ofMinutes(10);

    /** Width of a counting window. */
    public static final Duration WINDOW = Duration.ofMinutes(5);

    /** How far an event may run ahead of its record's timestamp before its clock is disbelieved. */
    public static final Duration MAX_SKEW = Duration.ofMinutes(5);

    private Northwater() {}

    /** Start of the window that holds a moment; both in milliseconds since the epoch. */
    public static long windowStart(long atMillis) {
        return Math.floorDiv(atMillis, WINDOW.toMillis()) * WINDOW.toMillis();
    }
}
