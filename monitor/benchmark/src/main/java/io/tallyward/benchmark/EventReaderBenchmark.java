package io.tallyward.benchmark;

import io.tallyward.connector.format.EventMapping;
import io.tallyward.connector.format.EventSlotReader;
import io.tallyward.engine.event.EventSlot;
import io.tallyward.engine.plan.PlanNames;
import java.nio.charset.StandardCharsets;
import java.util.List;
import java.util.concurrent.TimeUnit;
import org.openjdk.jmh.annotations.Benchmark;
import org.openjdk.jmh.annotations.BenchmarkMode;
import org.openjdk.jmh.annotations.Fork;
import org.openjdk.jmh.annotations.Measurement;
import org.openjdk.jmh.annotations.Mode;
import org.openjdk.jmh.annotations.OutputTimeUnit;
import org.openjdk.jmh.annotations.Scope;
import org.openjdk.jmh.annotations.State;
import org.openjdk.jmh.annotations.Warmup;

/** What it costs to read one event of some 178 bytes of JSON, whose members come in the same order as before. */
@State(Scope.Benchmark)
@BenchmarkMode(Mode.AverageTime)
@OutputTimeUnit(TimeUnit.NANOSECONDS)
@Fork(1)
@Warmup(iterations = 4, time = 500, timeUnit = TimeUnit.MILLISECONDS)
@Measurement(iterations = 5, time = 500, timeUnit = TimeUnit.MILLISECONDS)
public class EventReaderBenchmark {

    /** Events in turn; few enough to stay in the nearest cache, so that the reading itself is measured. */
    private static final int EVENTS = 64;

    private static final PlanNames NAMES = new PlanNames(
            List.of("quay-banner", "deck-map"), List.of(List.of("plain", "wide"), List.of("list", "flat")));

    private final EventSlotReader reader = new EventSlotReader(EventMapping.DEFAULT, 65_536, NAMES);
    private final EventSlot slot = new EventSlot();
    private final byte[][] events = new byte[EVENTS][];
    private int next;

    /** Makes the events. */
    public EventReaderBenchmark() {
        for (int i = 0; i < EVENTS; i++) {
            String event = "{\"kind\":\"" + (i % 8 == 0 ? "click" : "view") + "\",\"experiment\":\""
                    + (i % 2 == 0 ? "quay-banner\",\"variant\":\"wide" : "deck-map\",\"variant\":\"flat")
                    + "\",\"unit\":\"visitor-" + (100_000_000 + i) + "\",\"id\":\""
                    + Long.toHexString(Long.MIN_VALUE + i)
                    + "\",\"at\":\"2026-05-04T06:00:" + (10 + i % 50)
                    + ".125Z\",\"source\":\"northwater-booking-page\"}";
            events[i] = event.getBytes(StandardCharsets.UTF_8);
        }
    }

    /** Reads the next event. */
    @Benchmark
    public boolean read() {
        next = next + 1 & EVENTS - 1;
        return reader.read(events[next], slot);
    }
}
