package io.tallyward.demo;

import io.tallyward.demo.story.Northwater;
import io.tallyward.demo.story.StreamEvent;
import java.time.Duration;
import java.util.Locale;

/** Tells how far the stream is: day, events sent and their rate. Not thread-safe. */
final class StreamProgress {

    private static final long INTERVAL_NANOS = Duration.ofMillis(250).toNanos();

    private final int events;
    private final Screen screen;
    private final long startNanos = System.nanoTime();
    private long toldNanos = startNanos;
    private long toldDay;

    StreamProgress(int events, Screen screen) {
        this.events = events;
        this.screen = screen;
    }

    void sent(StreamEvent event, long count) {
        long day = 1
                + Duration.ofMillis(event.receivedMillis() - Northwater.START.toEpochMilli())
                        .toDays();
        long now = System.nanoTime();
        boolean step = day != toldDay;
        if (!step && now - toldNanos < INTERVAL_NANOS) {
            return;
        }
        double seconds = Math.max(1e-3, (now - startNanos) / 1e9);
        String text = String.format(
                Locale.ROOT, "  day %2d  %,9d of %,d events  %,7.0f/s", day, count, events, count / seconds);
        screen.progress(text, step);
        toldNanos = now;
        toldDay = day;
    }
}
