package io.tallyward.demo.bench;

import static org.junit.jupiter.api.Assertions.assertArrayEquals;
import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertThrows;

import java.util.SplittableRandom;
import java.util.stream.LongStream;
import org.junit.jupiter.api.Test;

class SightingsTest {

    @Test
    void matchesEachEventToTheFirstSightingThatContainsIt() {
        Sightings sightings = new Sightings();
        sightings.saw(50, 0);
        sightings.saw(100, 2);
        sightings.saw(150, 2);
        sightings.saw(200, 3);
        assertArrayEquals(new long[] {90, 80, 170}, sightings.latencies(new long[] {10, 20, 30}, 0));
    }

    @Test
    void leavesOutWhatWasSentBeforeMeasuringBegan() {
        Sightings sightings = new Sightings();
        sightings.saw(100, 3);
        assertArrayEquals(new long[] {80, 70}, sightings.latencies(new long[] {10, 20, 30}, 20));
    }

    @Test
    void holdsWhereTheClockPassesItsHighestValue() {
        Sightings sightings = new Sightings();
        sightings.saw(Long.MIN_VALUE + 9, 1);
        assertArrayEquals(new long[] {10}, sightings.latencies(new long[] {Long.MAX_VALUE}, Long.MAX_VALUE - 5));
    }

    @Test
    void refusesMoreOrFewerEventsThanWereSent() {
        Sightings sightings = new Sightings();
        sightings.saw(100, 2);
        assertThrows(IllegalStateException.class, () -> sightings.latencies(new long[] {10}, 0));
        assertThrows(IllegalStateException.class, () -> sightings.latencies(new long[] {10, 20, 30}, 0));
    }

    /** Commits every 100, events every 1: the latency of event n is the distance to the next multiple of 100. */
    @Test
    void agreesWithASearchThroughAllSightings() {
        SplittableRandom random = new SplittableRandom(26);
        int events = 5_000;
        long[] sent = LongStream.range(0, events).map(event -> 3 * event).toArray();
        long[] seenAt = new long[events];
        Sightings sightings = new Sightings();
        int counted = 0;
        for (long now = 0; counted < events; now += 100) {
            int next = Math.min(events, counted + random.nextInt(80));
            sightings.saw(now + 20_000, next);
            for (int event = counted; event < next; event++) {
                seenAt[event] = now + 20_000;
            }
            counted = next;
        }
        long[] expected = LongStream.range(0, events)
                .map(event -> seenAt[(int) event] - sent[(int) event])
                .toArray();
        assertArrayEquals(expected, sightings.latencies(sent, 0));
    }

    @Test
    void takesTheNearestRank() {
        long[] values = LongStream.rangeClosed(1, 200).toArray();
        assertEquals(100, Sightings.quantile(values, 0.5));
        assertEquals(198, Sightings.quantile(values, 0.99));
        assertEquals(200, Sightings.quantile(values, 1));
        assertEquals(7, Sightings.quantile(new long[] {7}, 0.01));
        assertThrows(IllegalArgumentException.class, () -> Sightings.quantile(values, Double.NaN));
        assertThrows(IllegalArgumentException.class, () -> Sightings.quantile(new long[0], 0.5));
    }

    @Test
    void countsWhatWasSentUpToAMoment() {
        SentTimes times = new SentTimes();
        for (int event = 0; event < 3_000; event++) {
            times.add(10L * event);
        }
        assertEquals(0, times.countUntil(-1));
        assertEquals(1, times.countUntil(0));
        assertEquals(101, times.countUntil(1_009));
        assertEquals(3_000, times.countUntil(1_000_000));
        assertEquals(3_000, times.toArray().length);
    }
}
