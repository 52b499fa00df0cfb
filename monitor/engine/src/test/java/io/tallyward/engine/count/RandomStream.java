package io.tallyward.engine.count;

import io.tallyward.engine.Events;
import io.tallyward.engine.Plans;
import io.tallyward.engine.count.CountOracle.Arrival;
import io.tallyward.engine.event.Event;
import io.tallyward.engine.event.EventKind;
import io.tallyward.engine.plan.AllocationEpoch;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.Variant;
import java.time.Duration;
import java.util.ArrayList;
import java.util.Comparator;
import java.util.List;
import java.util.Map;
import java.util.Random;

/**
 * A seeded stream over a run of six hours: few units, many events each, times on a coarse grid, so that ties, crossovers,
 * repeats, moved trials and clicks at the very edge of attribution are frequent. The same seed gives the same stream.
 */
final class RandomStream {

    static final int RUN_MINUTES = 360;

    /** The smallest grace of the three plans: what is delayed by no more is never late. */
    static final int GRACE_MINUTES = 4;

    private static final List<String> VARIANTS = List.of("plain", "wide", "tall");

    private final Random random;
    private final List<Arrival> arrivals = new ArrayList<>();

    private RandomStream(long seed) {
        random = new Random(seed);
    }

    /** Three experiments with different rhythms; the second ramps, the third starts with the others but ends earlier. */
    static List<Plan> plans() {
        Duration run = Duration.ofMinutes(RUN_MINUTES);
        return List.of(
                Plans.plan("quay-banner")
                        .atMost(run)
                        .segments("platform", "version")
                        .build(),
                Plans.plan("fare-chip")
                        .counting(Duration.ofMinutes(12), Duration.ofMinutes(GRACE_MINUTES), Duration.ofMinutes(10))
                        .atMost(run)
                        .segments("version")
                        .epochs(
                                new AllocationEpoch(
                                        Plans.FROM.plus(Duration.ofMinutes(95)), Map.of("plain", 0.3, "wide", 0.7)),
                                new AllocationEpoch(
                                        Plans.FROM.plus(Duration.ofMinutes(200)), Map.of("plain", 0.5, "wide", 0.5)))
                        .build(),
                Plans.plan("deck-map")
                        .variants(
                                new Variant("plain", 0.4, true),
                                new Variant("wide", 0.3, false),
                                new Variant("tall", 0.3, false))
                        .counting(Duration.ofMinutes(45), Duration.ofMinutes(20), Duration.ofMinutes(15))
                        .atMost(Duration.ofMinutes(RUN_MINUTES / 2))
                        .build());
    }

    /** Disorder of every kind, bad clocks and unknown names included, from the given number of sources. */
    static List<Arrival> wild(long seed, int sources) {
        RandomStream stream = new RandomStream(seed);
        stream.generate(sources, 900, true);
        return stream.arrivals;
    }

    /** A stream of which any arrival order made by {@link #shuffledWithinGrace} is free of late events. */
    static List<Arrival> tame(long seed, int sources) {
        RandomStream stream = new RandomStream(seed);
        stream.generate(sources, 900, false);
        return stream.arrivals;
    }

    /** The same records in another order, none of them overtaken by one that is younger by more than the grace. */
    static List<Arrival> shuffledWithinGrace(List<Arrival> arrivals, long seed) {
        Random order = new Random(seed);
        long grace = Duration.ofMinutes(GRACE_MINUTES).toMillis();
        record Delayed(Arrival arrival, long key) {}
        return arrivals.stream()
                .map(arrival -> new Delayed(arrival, arrival.event().atMillis() + order.nextLong(grace)))
                .sorted(Comparator.comparingLong(Delayed::key))
                .map(Delayed::arrival)
                .toList();
    }

    /** The partition of a record: every unit has its own. */
    static int partitionOf(Arrival arrival, int partitions) {
        return Math.floorMod(arrival.event().unit().hashCode(), partitions);
    }

    private void generate(int sources, int count, boolean wild) {
        for (int i = 0; i < count; i++) {
            double minute = random.nextInt(-20, 2 * RUN_MINUTES + 40) / 2.0;
            Event event = event(minute, wild);
            long record = event.atMillis() + delayMillis(wild);
            int source = random.nextInt(sources);
            arrivals.add(new Arrival(source, record, event));
            if (random.nextInt(10) == 0) {
                arrivals.add(new Arrival(source, record + delayMillis(wild), event));
            }
        }
        arrivals.sort(Comparator.comparingLong(Arrival::recordTimestamp));
    }

    private Event event(double minute, boolean wild) {
        String experiment =
                pick("quay-banner", "quay-banner", "fare-chip", "fare-chip", wild ? "no-such-plan" : "deck-map");
        if (wild && random.nextInt(3) == 0) {
            experiment = "deck-map";
        }
        int unit = random.nextInt(60);
        int variants = experiment.equals("deck-map") ? 3 : 2;
        String variant = VARIANTS.get(random.nextInt(6) == 0 ? random.nextInt(wild ? 3 : variants) : unit % variants);
        EventKind kind = random.nextInt(5) < 2 ? EventKind.VIEW : EventKind.CLICK;
        String id = Integer.toString(random.nextInt(40), 36);
        long jitter = random.nextInt(8) == 0 ? random.nextInt(-1, 2) : 0;
        Event event = Events.event(kind, experiment, variant, "unit-" + unit, id, Events.at(minute) + jitter);
        // The same id at the same time is the same event, so that a tie is broken the same way in any order of arrival.
        Random segment = new Random(31 * event.atMillis() + id.hashCode());
        return switch (segment.nextInt(4)) {
            case 0 -> event;
            case 1 -> Events.with(event, "version", "6." + segment.nextInt(4), "platform", "");
            default ->
                Events.with(
                        event, "platform", segment.nextBoolean() ? "ios" : "web", "version", "6." + segment.nextInt(4));
        };
    }

    private String pick(String... choices) {
        return choices[random.nextInt(choices.length)];
    }

    /** Mostly prompt; in a wild stream sometimes hours late, and sometimes from a clock that is ahead. */
    private long delayMillis(boolean wild) {
        int kind = wild ? random.nextInt(20) : 19;
        double minutes = switch (kind) {
            case 0 -> random.nextInt(300);
            case 1, 2 -> 30 + random.nextInt(60);
            case 3 -> -10 * random.nextDouble();
            default -> GRACE_MINUTES * random.nextDouble();
        };
        return Math.round(minutes * 60_000);
    }
}
