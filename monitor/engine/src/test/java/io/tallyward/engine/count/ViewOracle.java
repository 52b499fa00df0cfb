package io.tallyward.engine.count;

import io.tallyward.engine.count.CountOracle.Arrival;
import io.tallyward.engine.count.Counted.Place;
import io.tallyward.engine.count.WindowTally.Cell;
import io.tallyward.engine.event.Event;
import io.tallyward.engine.event.EventKind;
import io.tallyward.engine.plan.Plan;
import java.nio.charset.StandardCharsets;
import java.util.ArrayList;
import java.util.Comparator;
import java.util.HashMap;
import java.util.HashSet;
import java.util.LinkedHashMap;
import java.util.List;
import java.util.Map;
import java.util.Optional;
import java.util.Set;
import java.util.TreeMap;
import java.util.zip.CRC32;

/**
 * Counts a whole input by view in one go, from the rules alone, after sorting by event time. Of the order of arrival it uses
 * nothing but the watermark that each event found in its source. Outcomes are right where nothing is late; counts always.
 */
final class ViewOracle {

    private final Plan plan;
    private final Map<Place, Cell> cells = new TreeMap<>();
    private final OutcomeCounts.Builder outcomes = new OutcomeCounts.Builder();

    private record Admitted(Event event, long watermark) {}

    ViewOracle(Plan plan) {
        this.plan = plan;
    }

    /** Adds a whole partition. */
    void count(List<Arrival> partition) {
        Map<Integer, Long> watermarks = new HashMap<>();
        Map<String, List<Admitted>> units = new LinkedHashMap<>();
        for (Arrival arrival : partition) {
            Event event = arrival.event();
            long found = watermarks.getOrDefault(arrival.source(), Long.MIN_VALUE);
            if (plan.run().contains(event.atMillis())) {
                // The experiments of the stream share their run, so each moves the watermark for both.
                watermarks.put(arrival.source(), Math.max(found, event.atMillis()));
            }
            if (!event.experiment().equals(plan.experiment())) {
                continue;
            }
            if (plan.run().contains(event.atMillis())) {
                units.computeIfAbsent(event.unit(), unit -> new ArrayList<>()).add(new Admitted(event, found));
            } else {
                outcomes.add(Outcome.OUTSIDE, 1);
            }
        }
        units.values().forEach(this::countUnit);
    }

    private long windowEnd(long at) {
        long width = plan.count().window().toMillis();
        return Math.floorDiv(at, width) * width + width;
    }

    private long attribution() {
        return plan.count().attribution().toMillis();
    }

    private long clicksUntil(Event view) {
        long width = plan.count().window().toMillis();
        long wholeWindows = (attribution() + width - 1) / width * width;
        return windowEnd(view.atMillis()) + wholeWindows + plan.count().grace().toMillis();
    }

    private void countUnit(List<Admitted> events) {
        Map<String, Event> views = new LinkedHashMap<>();
        for (Admitted admitted : events) {
            Event event = admitted.event();
            boolean inGrace = admitted.watermark()
                    < windowEnd(event.atMillis()) + plan.count().grace().toMillis();
            if (event.kind() == EventKind.VIEW && inGrace) {
                Event before = views.putIfAbsent(event.source() + "/" + event.id(), event);
                outcomes.add(Outcome.DUPLICATE, before == null ? 0 : 1);
            }
        }
        Optional<Event> first = views.values().stream().min(ORDER);
        List<Event> trials = views.values().stream()
                .filter(view -> view.variant().equals(first.get().variant()))
                .sorted(ORDER)
                .toList();
        outcomes.add(Outcome.TRIAL, trials.size()).add(Outcome.CROSSOVER, (long) views.size() - trials.size());
        Set<Event> successes = new HashSet<>();
        for (Admitted admitted : events) {
            if (admitted.event().kind() == EventKind.CLICK) {
                outcomes.addOf(
                        plan.variantIndex(admitted.event().variant()), click(admitted, first, trials, successes));
            }
        }
        first.ifPresent(found -> addCells(found, trials, successes));
    }

    private static final Comparator<Event> ORDER = Comparator.comparingLong(Event::atMillis)
            .thenComparing(event -> crc32(event.id()))
            .thenComparing(Event::variant);

    private static long crc32(String id) {
        CRC32 crc = new CRC32();
        crc.update(id.getBytes(StandardCharsets.UTF_8));
        return crc.getValue();
    }

    private Outcome click(Admitted admitted, Optional<Event> first, List<Event> trials, Set<Event> successes) {
        Event click = admitted.event();
        if (first.isEmpty() || click.atMillis() < first.get().atMillis()) {
            return Outcome.ORPHAN;
        }
        if (!click.variant().equals(first.get().variant())) {
            return Outcome.CROSSOVER;
        }
        List<Event> before = trials.stream()
                .filter(trial -> trial.atMillis() <= click.atMillis())
                .toList();
        Optional<Event> view = click.viewId().isEmpty()
                ? Optional.of(before.get(before.size() - 1))
                : before.stream()
                        .filter(trial -> trial.id().equals(click.viewId()))
                        .findFirst();
        if (view.isPresent() && click.atMillis() - view.get().atMillis() <= attribution()) {
            if (admitted.watermark() >= clicksUntil(view.get())) {
                return Outcome.LATE;
            }
            return successes.add(view.get()) ? Outcome.SUCCESS : Outcome.REPEAT;
        }
        boolean noneExpired = click.atMillis() - first.get().atMillis() < attribution();
        return view.isEmpty() && noneExpired ? Outcome.ORPHAN : Outcome.EXPIRED;
    }

    /** Window by window, from the definition of the sums over units. */
    private void addCells(Event first, List<Event> trials, Set<Event> successes) {
        long width = plan.count().window().toMillis();
        int epoch = plan.epochAt(first.atMillis());
        int variant = plan.variantIndex(first.variant());
        TreeMap<Long, List<Event>> windows = new TreeMap<>();
        trials.forEach(trial -> windows.computeIfAbsent(windowEnd(trial.atMillis()) - width, start -> new ArrayList<>())
                .add(trial));
        long x = 0;
        long y = 0;
        for (Map.Entry<Long, List<Event>> window : windows.entrySet()) {
            long newX = x + window.getValue().size();
            long newY =
                    y + window.getValue().stream().filter(successes::contains).count();
            Cell cell = new Cell(
                    epoch,
                    variant,
                    x == 0 ? 1 : 0,
                    newX - x,
                    newY - y,
                    newX * newX - x * x,
                    newX * newY - x * y,
                    newY * newY - y * y);
            cells.merge(Place.of(window.getKey(), epoch, variant), cell, Cell::plus);
            x = newX;
            y = newY;
        }
    }

    Map<Place, Cell> cells() {
        return cells;
    }

    OutcomeCounts outcomes() {
        return outcomes.build();
    }
}
