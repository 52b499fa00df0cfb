package io.tallyward.demo.check;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertTrue;

import java.io.IOException;
import java.nio.file.Files;
import java.nio.file.Path;
import java.time.Instant;
import java.util.List;
import java.util.Map;
import org.junit.jupiter.api.Test;
import org.junit.jupiter.api.io.TempDir;

class DecisionLogTest {

    private static final String FIRST = record(1, "2026-05-04T06:00:00Z", "a1");
    private static final String SECOND = record(2, "2026-05-04T12:00:00Z", "b2");
    private static final Map<String, Instant> UNTIL_NOON = Map.of("quay-banner", Instant.parse("2026-05-04T12:00:00Z"));

    @TempDir
    private Path directory;

    private static String record(int sequence, String windowEnd, String hash) {
        return "{\"type\":\"decision\",\"experiment\":\"quay-banner\",\"sequence\":%d,\"windowEnd\":\"%s\",\"hash\":\"%s\"}"
                .formatted(sequence, windowEnd, hash);
    }

    private DecisionLog log(String... lines) throws IOException {
        Path file = Files.createTempFile(directory, "printed", ".jsonl");
        Files.write(file, List.of(lines));
        return DecisionLog.ofReplay(file);
    }

    @Test
    void holdsWhenEveryRecordIsTheSame() throws IOException {
        DecisionLog live = log("{\"type\":\"input\",\"events\":3}", FIRST, SECOND);
        assertEquals(2, live.size());
        assertTrue(live.sameAs(log(FIRST, SECOND), UNTIL_NOON).holds());
    }

    @Test
    void doesNotHoldWhenARecordIsMissingDoubledOrOther() throws IOException {
        DecisionLog right = log(FIRST, SECOND);
        assertEquals(1, log(FIRST).sameAs(right, UNTIL_NOON).differences().size());
        assertEquals(
                1,
                log(FIRST, FIRST, SECOND)
                        .sameAs(right, UNTIL_NOON)
                        .differences()
                        .size());
        assertEquals(
                1,
                log(FIRST, SECOND.replace("b2", "c3"))
                        .sameAs(right, UNTIL_NOON)
                        .differences()
                        .size());
    }

    @Test
    void letsAReplayGoFurtherThanTheMonitorHasCome() throws IOException {
        DecisionLog replayed = log(FIRST, SECOND, record(3, "2026-05-04T18:00:00Z", "d4"));
        assertTrue(log(FIRST, SECOND).sameAs(replayed, UNTIL_NOON).holds());
    }
}
