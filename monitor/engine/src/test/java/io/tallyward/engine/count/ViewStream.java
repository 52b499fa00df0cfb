package io.tallyward.engine.count;

import io.tallyward.engine.Events;
import io.tallyward.engine.Plans;
import io.tallyward.engine.count.CountOracle.Arrival;
import io.tallyward.engine.event.Event;
import io.tallyward.engine.event.EventKind;
import io.tallyward.engine.plan.AllocationEpoch;
import io.tallyward.engine.plan.Plan;
import java.time.Duration;
import java.util.ArrayList;
import java.util.Comparator;
import java.util.List;
import java.util.Map;
import java.util.Random;

/**
 * A seeded stream for counting by view over a run of six hours: units with many views each, copies of views, views under
 * another variant, clicks that name a view, name a view that never was, or name none. The same seed gives the same stream.
 */
final class ViewStream {

    private static final int RUN_MINUTES = 360;
    private static final int UNITS = 25;
    private static final List<String> VARIANTS = List.of("plain", "wide");

    private final Random random;
    private final List<Arrival> arrivals = new ArrayList<>();
    private final List<Event> views = new ArrayList<>();

    private ViewStream(long seed) {
        random = new Random(seed);
    }

    /** Two experiments with different rhythms; the attribution of the second is no multiple of its window, and it ramps. */
    static List<Plan> plans() {
        Duration run = Duration.ofMinutes(RUN_MINUTES);
        return List.of(
                Plans.plan("quay-banner").byView().atMost(run).build(),
                Plans.plan("fare-chip")
                        .counting(
                                Duration.ofMinutes(14),
                                Duration.ofMinutes(RandomStream.GRACE_MINUTES),
                                Duration.ofMinutes(10))
                        .byView()
                        .atMost(run)
                        .epochs(new AllocationEpoch(
                                Plans.FROM.plus(Duration.ofMinutes(95)), Map.of("plain", 0.3, "wide", 0.7)))
                        .build());
    }

    /** Disorder of every kind. */
    static List<Arrival> wild(long seed, int sources) {
        return new ViewStream(seed).generate(sources, true);
    }

    /** A stream of which any order made by {@link RandomStream#shuffledWithinGrace} is free of late events. */
    static List<Arrival> tame(long seed, int sources) {
        return new ViewStream(seed).generate(sources, false);
    }

    private List<Arrival> generate(int sources, boolean wild) {
        for (int i = 0; i < 900; i++) {
            Event event = event(i);
            int source = random.nextInt(sources);
            add(source, event, wild);
            for (int copies = random.nextInt(8) == 0 ? 1 + random.nextInt(2) : 0; copies > 0; copies--) {
                add(source, event, wild);
            }
        }
        arrivals.sort(Comparator.comparingLong(Arrival::recordTimestamp));
        return arrivals;
    }

    private void add(int source, Event event, boolean wild) {
        double minutes = RandomStream.GRACE_MINUTES * random.nextDouble();
        if (wild && random.nextInt(8) == 0) {
            minutes = random.nextInt(150);
        }
        arrivals.add(new Arrival(source, event.atMillis() + Math.round(minutes * 60_000), event));
    }

    private Event event(int number) {
        String experiment = random.nextBoolean() ? "quay-banner" : "fare-chip";
        int unit = random.nextInt(UNITS);
        String variant = VARIANTS.get(random.nextInt(7) == 0 ? random.nextInt(2) : unit % 2);
        long at = Events.at(random.nextInt(-10, 2 * RUN_MINUTES + 20) / 2.0);
        String source = random.nextInt(3) == 0 ? "" : "northwater-web";
        if (random.nextInt(5) < 2) {
            Event view = new Event(
                    EventKind.VIEW, experiment, variant, "unit-" + unit, source, "v" + number, at, "", Map.of());
            views.add(view);
            return view;
        }
        if (random.nextInt(3) == 0 || views.isEmpty()) {
            return click(experiment, variant, "unit-" + unit, number, at, "");
        }
        if (random.nextInt(10) == 0) {
            return click(experiment, variant, "unit-" + unit, number, at, "no-such-view");
        }
        Event view = views.get(random.nextInt(views.size()));
        String clicked = random.nextInt(9) == 0 ? variant : view.variant();
        long after = random.nextInt(-4, 70) * 30_000L;
        String name = random.nextInt(4) == 0 ? "" : view.id();
        return click(view.experiment(), clicked, view.unit(), number, view.atMillis() + after, name);
    }

    private static Event click(String experiment, String variant, String unit, int number, long at, String view) {
        return new Event(EventKind.CLICK, experiment, variant, unit, "", "c" + number, at, view, Map.of());
    }
}
