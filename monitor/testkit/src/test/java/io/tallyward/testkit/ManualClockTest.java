package io.tallyward.testkit;

import static org.junit.jupiter.api.Assertions.assertEquals;

import java.time.Duration;
import java.time.Instant;
import java.time.ZoneId;
import org.junit.jupiter.api.Test;

class ManualClockTest {

    private final ManualClock clock = ManualClock.at("2026-05-04T06:00:00Z");

    @Test
    void standsStillUntilItIsMoved() {
        assertEquals(clock.instant(), clock.instant());
        clock.advance(Duration.ofMinutes(5));
        assertEquals(Instant.parse("2026-05-04T06:05:00Z"), clock.instant());
        clock.advance(Duration.ofMinutes(-10));
        assertEquals(Instant.parse("2026-05-04T05:55:00Z"), clock.instant());
    }

    @Test
    void movesTogetherWithItsOtherZones() {
        ZoneId oslo = ZoneId.of("Europe/Oslo");
        clock.set(Instant.parse("2026-05-05T00:00:00Z"));
        assertEquals(clock.instant(), clock.withZone(oslo).instant());
        assertEquals(oslo, clock.withZone(oslo).getZone());
    }
}
