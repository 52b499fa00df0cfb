package io.tallyward.demo.bench;

import io.tallyward.engine.count.CountEffects;
import io.tallyward.engine.count.CountSettings;
import io.tallyward.engine.count.CountShard;
import io.tallyward.engine.event.Event;
import io.tallyward.engine.event.EventKind;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.shard.StateChange;
import io.tallyward.service.config.document.BadInputException;
import io.tallyward.service.plan.PlanDirectory;
import java.io.IOException;
import java.lang.management.ManagementFactory;
import java.lang.management.ThreadMXBean;
import java.nio.file.Path;
import java.time.Duration;
import java.util.ArrayList;
import java.util.List;
import java.util.Map;

/**
 * How much heap a million units take and how fast they are restored: five million units in one shard, each viewed once, one
 * in eight with a click. Prints its figures.
 */
public final class MemoryMain {

    private static final ThreadMXBean THREADS = ManagementFactory.getThreadMXBean();

    private static final int UNITS = 5_000_000;
    private static final int CLICK_EVERY = 8;
    private static final int UNITS_PER_COMMIT = 100_000;
    private static final double MEGABYTE = 1e6;
    private static final double MILLIONS = UNITS / 1e6;

    private final Plan plan;
    private final List<StateChange> openState = new ArrayList<>();
    private final List<StateChange> sealedState = new ArrayList<>();

    private MemoryMain(Plan plan) {
        this.plan = plan;
    }

    /** Needs a directory to write the plans into. */
    public static void main(String[] arguments) throws IOException, BadInputException {
        Path plans = Path.of(arguments[0]).resolve("plans");
        Traffic.ofStories().writePlans(plans);
        Plan plan = PlanDirectory.read(plans).orElseThrow().stream()
                .filter(each -> each.experiment().equals("quay-banner"))
                .findFirst()
                .orElseThrow();
        new MemoryMain(plan).measure();
        System.exit(0);
    }

    private void measure() {
        CountShard shard = shard();
        fill(shard, false);
        double open = megabytesPerMillion(shard);
        shard.endOfInput();
        shard.drain();
        double sealed = megabytesPerMillion(shard);
        fill(shard(), true);
        MemoryResults results = new MemoryResults(
                new MemoryResults.Row(open, restored("open units", openState)),
                new MemoryResults.Row(sealed, restored("sealed units", sealedState)));
        System.out.println(results.line());
    }

    private CountShard shard() {
        CountSettings settings = new CountSettings(Duration.ofMinutes(5), Duration.ofDays(1), new byte[] {1});
        return new CountShard(0, 1, List.of(plan), settings, List.of("events"));
    }

    /** Fills half an hour of event time, so that nothing is sealed; keeps what would be made durable if told to. */
    private void fill(CountShard shard, boolean keep) {
        long from = plan.run().from().toEpochMilli();
        for (int unit = 0; unit < UNITS; unit++) {
            long at = from + unit / (UNITS / 1_800_000L + 1);
            apply(shard, EventKind.VIEW, unit, at);
            if (unit % CLICK_EVERY == 0) {
                apply(shard, EventKind.CLICK, unit, at + 1_000);
            }
            if (unit % UNITS_PER_COMMIT == UNITS_PER_COMMIT - 1) {
                CountEffects effects = shard.drain();
                openState.addAll(keep ? effects.state() : List.of());
            }
        }
        if (keep) {
            shard.endOfInput();
            shard.drain().state().stream()
                    .filter(change -> change.value() != null)
                    .forEach(sealedState::add);
        }
    }

    private void apply(CountShard shard, EventKind kind, int unit, long at) {
        String variant = plan.variants().get(unit & 1).name();
        Event event = new Event(
                kind, plan.experiment(), variant, "visitor-" + unit, "", kind.name() + unit, at, "", Map.of());
        if (shard.apply(0, at, event).isPresent()) {
            throw new IllegalStateException("unit " + unit + ": rejected (expected: admitted)");
        }
    }

    private double megabytesPerMillion(CountShard shard) {
        long with = heapBytes();
        long units = shard.view().experiments().get(plan.experiment()).units();
        if (units != UNITS) {
            throw new IllegalStateException("units: " + units + " (expected: " + UNITS + ")");
        }
        return (with - bare) / MEGABYTE / MILLIONS;
    }

    private final long bare = heapBytes();

    private static long heapBytes() {
        for (int i = 0; i < 3; i++) {
            System.gc();
        }
        return ManagementFactory.getMemoryMXBean().getHeapMemoryUsage().getUsed();
    }

    /** Millions per second of CPU time, at best. */
    private double restored(String what, List<StateChange> state) {
        double best = 0;
        for (int attempt = 0; attempt < 3; attempt++) {
            CountShard shard = shard();
            long began = THREADS.getCurrentThreadCpuTime();
            state.forEach(change -> shard.restore(change.key(), change.value()));
            double seconds = (THREADS.getCurrentThreadCpuTime() - began) / 1e9;
            best = Math.max(best, MILLIONS / seconds);
            if (shard.view().experiments().get(plan.experiment()).units() != UNITS) {
                throw new IllegalStateException(what + ": not all were restored");
            }
        }
        return best;
    }
}
