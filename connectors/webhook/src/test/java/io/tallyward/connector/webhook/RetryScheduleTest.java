package io.tallyward.connector.webhook;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertThrows;
import static org.junit.jupiter.api.Assertions.assertTrue;

import java.time.Duration;
import java.util.HashSet;
import java.util.List;
import java.util.Set;
import org.junit.jupiter.api.Test;

class RetryScheduleTest {

    /** The waits of the example in the Standard Webhooks specification. */
    private static final List<Duration> SPECIFIED = List.of(
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

    @Test
    void drawsEveryWaitOutByUpToAFifth() {
        RetrySchedule schedule = RetrySchedule.standard(1);
        assertEquals(SPECIFIED.size(), schedule.attempts());
        Set<Duration> seen = new HashSet<>();
        for (int notice = 0; notice < 200; notice++) {
            for (int attempt = 1; attempt <= schedule.attempts(); attempt++) {
                Duration specified = SPECIFIED.get(attempt - 1);
                Duration wait = schedule.delayBefore("n_" + notice, attempt);
                assertTrue(wait.compareTo(specified) >= 0, wait::toString);
                assertTrue(wait.compareTo(specified.multipliedBy(6).dividedBy(5)) <= 0, wait::toString);
                seen.add(wait);
            }
        }
        assertTrue(seen.size() > 1_500, "waits differ: " + seen.size());
    }

    @Test
    void repeatsItselfForTheSameSeedAndNotice() {
        assertEquals(
                RetrySchedule.standard(5).delayBefore("n_1", 4),
                RetrySchedule.standard(5).delayBefore("n_1", 4));
        assertTrue(!RetrySchedule.standard(5)
                .delayBefore("n_1", 4)
                .equals(RetrySchedule.standard(6).delayBefore("n_1", 4)));
    }

    @Test
    void scalesEveryWait() {
        assertEquals(
                List.of(0L, 5L, 300L, 1800L, 7200L, 18000L, 36000L, 50400L, 72000L, 86400L),
                RetrySchedule.standard(1).scaled(0.001).delays().stream()
                        .map(Duration::toMillis)
                        .toList());
    }

    @Test
    void refusesNonsense() {
        assertThrows(IllegalArgumentException.class, () -> new RetrySchedule(List.of(), 0, 1));
        assertThrows(IllegalArgumentException.class, () -> new RetrySchedule(List.of(Duration.ofSeconds(-1)), 0, 1));
        assertThrows(IllegalArgumentException.class, () -> new RetrySchedule(SPECIFIED, Double.NaN, 1));
        assertThrows(
                IllegalArgumentException.class, () -> RetrySchedule.standard(1).scaled(Double.NaN));
    }
}
