package io.tallyward.engine.count;

import io.tallyward.engine.count.Counted.Count;
import io.tallyward.engine.count.Counted.Place;
import io.tallyward.engine.event.Event;
import io.tallyward.engine.event.EventKind;
import io.tallyward.engine.event.RejectReason;
import io.tallyward.engine.plan.Plan;
import java.nio.charset.StandardCharsets;
import java.util.ArrayList;
import java.util.Collection;
import java.util.Comparator;
import java.util.EnumMap;
import java.util.HashMap;
import java.util.List;
import java.util.Map;
import java.util.Optional;
import java.util.TreeMap;
import java.util.zip.CRC32;

/**
 * Counts a whole input in one go, from the rules alone. Of the order of arrival it uses nothing but the watermark that each
 * event found: the latest event time admitted before it from its source. Everything else is a sort by event time.
 *
 * <p>Outcomes are those of one source. Where several meet, the counts hold all the same, but what a late event is called may
 * depend on whether the other source's events were there already.
 */
final class CountOracle {

    private final Map<String, Plan> plans = new HashMap<>();
    private final Map<String, Map<Place, Count>> cells = new HashMap<>();
    private final Map<String, Map<String, Map<Place, Long>>> segments = new HashMap<>();
    private final Map<String, OutcomeCounts.Builder> outcomes = new HashMap<>();
    private final Map<RejectReason, Long> rejected = new EnumMap<>(RejectReason.class);

    /** One record as it reached a partition. */
    record Arrival(int source, long recordTimestamp, Event event) {}

    /** An admitted event of a run with the watermark it found. */
    private record Admitted(Event event, long watermark) {}

    private record UnitKey(String experiment, String unit) {}

    CountOracle(Collection<Plan> plans) {
        for (Plan plan : plans) {
            this.plans.put(plan.experiment(), plan);
            cells.put(plan.experiment(), new TreeMap<>());
            segments.put(plan.experiment(), new TreeMap<>());
            outcomes.put(plan.experiment(), new OutcomeCounts.Builder());
        }
    }

    /** Adds a whole partition. */
    void count(List<Arrival> partition) {
        Map<Integer, Long> watermarks = new HashMap<>();
        Map<UnitKey, List<Admitted>> units = new HashMap<>();
        for (Arrival arrival : partition) {
            Event event = arrival.event();
            Optional<RejectReason> reason = refusal(arrival);
            if (reason.isPresent()) {
                rejected.merge(reason.get(), 1L, Long::sum);
            } else if (!plans.get(event.experiment()).run().contains(event.atMillis())) {
                outcomes.get(event.experiment()).add(Outcome.OUTSIDE, 1);
            } else {
                long found = watermarks.getOrDefault(arrival.source(), Long.MIN_VALUE);
                units.computeIfAbsent(new UnitKey(event.experiment(), event.unit()), key -> new ArrayList<>())
                        .add(new Admitted(event, found));
                watermarks.put(arrival.source(), Math.max(found, event.atMillis()));
            }
        }
        units.forEach((key, events) -> countUnit(plans.get(key.experiment()), events));
    }

    private Optional<RejectReason> refusal(Arrival arrival) {
        Plan plan = plans.get(arrival.event().experiment());
        if (plan == null) {
            return Optional.of(RejectReason.UNKNOWN_EXPERIMENT);
        }
        if (plan.variantIndex(arrival.event().variant()) < 0) {
            return Optional.of(RejectReason.UNKNOWN_VARIANT);
        }
        long limit = arrival.recordTimestamp() + CountHost.MAX_SKEW.toMillis();
        return arrival.event().atMillis() > limit ? Optional.of(RejectReason.BAD_TIME) : Optional.empty();
    }

    private void countUnit(Plan plan, List<Admitted> events) {
        OutcomeCounts.Builder told = outcomes.get(plan.experiment());
        Optional<Admitted> trial = events.stream()
                .filter(admitted -> isView(admitted) && admitted.watermark() < sealedAt(plan, admitted.event()))
                .min(Comparator.comparingLong(
                                (Admitted admitted) -> admitted.event().atMillis())
                        .thenComparing(admitted -> crc32(admitted.event().id()))
                        .thenComparing(
                                admitted -> plan.variantIndex(admitted.event().variant())));
        if (trial.isEmpty()) {
            events.forEach(admitted -> told.addOf(
                    plan.variantIndex(admitted.event().variant()), isView(admitted) ? Outcome.LATE : Outcome.ORPHAN));
            return;
        }
        Event first = trial.get().event();
        long inTime = events.stream()
                .filter(admitted -> clickedInTime(plan, first, admitted))
                .filter(admitted -> admitted.watermark() < sealedAt(plan, first))
                .count();
        for (Admitted admitted : events) {
            if (isView(admitted)) {
                told.add(ofView(first, admitted.event(), admitted == trial.get()), 1);
            } else if (!clickedInTime(plan, first, admitted)) {
                told.addOf(plan.variantIndex(admitted.event().variant()), ofClickOutOfTime(first, admitted.event()));
            } else if (inTime == 0) {
                told.add(Outcome.LATE, 1);
            } else {
                told.add(Outcome.REPEAT, 1);
            }
        }
        if (inTime > 0) {
            told.add(Outcome.REPEAT, -1).add(Outcome.SUCCESS, 1);
        }
        long window = windowOf(plan, first);
        Place place = Place.of(window, plan.epochAt(first.atMillis()), plan.variantIndex(first.variant()));
        cells.get(plan.experiment()).merge(place, new Count(1, inTime > 0 ? 1 : 0), Count::plus);
        for (String field : plan.splitCheck().segments()) {
            String value = first.segments().getOrDefault(field, "");
            segments.get(plan.experiment())
                    .computeIfAbsent(field + "=" + (value.isEmpty() ? "none" : value), segment -> new TreeMap<>())
                    .merge(place, 1L, Long::sum);
        }
    }

    private static long crc32(String id) {
        CRC32 crc = new CRC32();
        crc.update(id.getBytes(StandardCharsets.UTF_8));
        return crc.getValue();
    }

    private static boolean isView(Admitted admitted) {
        return admitted.event().kind() == EventKind.VIEW;
    }

    private static long windowOf(Plan plan, Event event) {
        long width = plan.count().window().toMillis();
        return Math.floorDiv(event.atMillis(), width) * width;
    }

    /** The watermark at which the window of an event is sealed: its end, attribution and grace. */
    private static long sealedAt(Plan plan, Event event) {
        return windowOf(plan, event)
                + plan.count().window().toMillis()
                + plan.count().attribution().toMillis()
                + plan.count().grace().toMillis();
    }

    private static boolean clickedInTime(Plan plan, Event first, Admitted admitted) {
        Event event = admitted.event();
        long delay = event.atMillis() - first.atMillis();
        return !isView(admitted)
                && event.variant().equals(first.variant())
                && delay >= 0
                && delay <= plan.count().attribution().toMillis();
    }

    private static Outcome ofView(Event first, Event view, boolean trial) {
        if (trial) {
            return Outcome.TRIAL;
        }
        if (view.atMillis() < first.atMillis()) {
            return Outcome.LATE;
        }
        return view.variant().equals(first.variant()) ? Outcome.REPEAT : Outcome.CROSSOVER;
    }

    private static Outcome ofClickOutOfTime(Event first, Event click) {
        if (click.atMillis() < first.atMillis()) {
            return Outcome.ORPHAN;
        }
        return click.variant().equals(first.variant()) ? Outcome.EXPIRED : Outcome.CROSSOVER;
    }

    Counted counted(String experiment) {
        return new Counted(cells.get(experiment), segments.get(experiment));
    }

    OutcomeCounts outcomes(String experiment) {
        return outcomes.get(experiment).build();
    }

    long rejected(RejectReason reason) {
        return rejected.getOrDefault(reason, 0L);
    }
}
