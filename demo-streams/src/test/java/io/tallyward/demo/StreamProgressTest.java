package io.tallyward.demo;

import static org.junit.jupiter.api.Assertions.assertEquals;

import io.tallyward.demo.story.StreamEvent;
import io.tallyward.demo.story.ToldScenario;
import java.io.ByteArrayOutputStream;
import java.io.PrintStream;
import java.nio.charset.StandardCharsets;
import java.util.List;
import java.util.stream.IntStream;
import org.junit.jupiter.api.Test;

class StreamProgressTest {

    private static final long NANOS_PER_EVENT = 1_000_000;

    private final ByteArrayOutputStream shown = new ByteArrayOutputStream();
    private final Screen screen = new Screen(new PrintStream(shown, true, StandardCharsets.UTF_8), false);
    private long nanos;

    @Test
    void tellsOfEveryFullDayAndOfNoOther() {
        List<StreamEvent> events = ToldScenario.withDefaultSeed().events();
        StreamProgress progress = new StreamProgress(events.size(), screen, () -> nanos);
        for (int i = 0; i < events.size(); i++) {
            nanos += NANOS_PER_EVENT;
            progress.sent(events.get(i), i + 1);
        }
        List<String> lines = shown.toString(StandardCharsets.UTF_8).lines().toList();
        List<String> days =
                lines.stream().map(line -> line.strip().split(" {2,}")[0]).toList();
        assertEquals(
                IntStream.rangeClosed(1, 14).mapToObj(day -> "after day " + day).toList(), days);
        lines.forEach(line -> assertEquals("1,000/s", line.substring(line.lastIndexOf(' ') + 1), line));
    }
}
