package io.tallyward.demo.truth;

import io.tallyward.demo.story.Northwater;
import io.tallyward.demo.story.Story;
import io.tallyward.demo.story.StreamEvent;
import java.util.ArrayList;
import java.util.HashSet;
import java.util.LinkedHashMap;
import java.util.List;
import java.util.Map;
import java.util.Optional;
import java.util.Set;
import java.util.TreeMap;

/**
 * The rules of counting by view applied to everything one unit did in one experiment, read as a whole.
 *
 * @param firstView the first exposure; empty when no view was delivered in time
 * @param counts what the unit adds to each window, by its start
 * @param fates what becomes of each event, in the order in which the events were given
 */
record ViewVerdict(Optional<StreamEvent> firstView, Map<Long, Count> counts, List<Fate> fates) {

    private static final long ATTRIBUTION = Northwater.ATTRIBUTION.toMillis();

    /** Judges the events of one unit in one experiment, none of them rejected, in the order of their arrival. */
    static ViewVerdict of(Story story, List<StreamEvent> events) {
        Map<Long, StreamEvent> views = new LinkedHashMap<>();
        for (StreamEvent event : events) {
            if (event.isView() && story.runsAt(event.atMillis()) && !event.late()) {
                views.putIfAbsent(event.id(), event);
            }
        }
        Optional<StreamEvent> first = views.values().stream().min(UnitVerdict.EARLIEST);
        List<StreamEvent> trials = views.values().stream()
                .filter(view -> UnitVerdict.sameVariant(view, first.get()))
                .sorted(UnitVerdict.EARLIEST)
                .toList();
        Reading reading = new Reading(story, events, first, trials, new HashSet<>(), new HashSet<>());
        List<Fate> fates = new ArrayList<>();
        for (int i = 0; i < events.size(); i++) {
            fates.add(reading.fate(i));
        }
        return new ViewVerdict(first, counts(trials, reading.successes()), fates);
    }

    /**
     * What is known of the unit as a whole, and what has been told so far.
     *
     * @param seen ids of the views told
     * @param successes trials with a click in time told
     */
    private record Reading(
            Story story,
            List<StreamEvent> events,
            Optional<StreamEvent> first,
            List<StreamEvent> trials,
            Set<Long> seen,
            Set<StreamEvent> successes) {

        Fate fate(int number) {
            StreamEvent event = events.get(number);
            if (!story.runsAt(event.atMillis())) {
                return Fate.OUTSIDE;
            }
            if (event.isView()) {
                return view(event);
            }
            if (first.isEmpty() || event.atMillis() < first.get().atMillis()) {
                return Fate.ORPHAN;
            }
            if (!UnitVerdict.sameVariant(event, first.get())) {
                return Fate.CROSSOVER;
            }
            return event.late() ? lateClick(event, number) : click(event);
        }

        private Fate view(StreamEvent view) {
            boolean other = first.isPresent() && !UnitVerdict.sameVariant(view, first.get());
            if (view.late()) {
                boolean after = other && view.atMillis() >= first.get().atMillis();
                return after ? Fate.CROSSOVER : Fate.LATE;
            }
            if (!seen.add(view.id())) {
                return Fate.DUPLICATE;
            }
            return other ? Fate.CROSSOVER : Fate.TRIAL;
        }

        private Fate click(StreamEvent click) {
            List<StreamEvent> before = trials.stream()
                    .filter(trial -> trial.atMillis() <= click.atMillis())
                    .toList();
            Optional<StreamEvent> view = click.viewId() == 0
                    ? Optional.of(before.get(before.size() - 1))
                    : before.stream()
                            .filter(trial -> trial.id() == click.viewId())
                            .findFirst();
            if (view.isPresent() && click.atMillis() - view.get().atMillis() <= ATTRIBUTION) {
                return successes.add(view.get()) ? Fate.SUCCESS : Fate.REPEAT;
            }
            boolean noneExpired = click.atMillis() - first.get().atMillis() < ATTRIBUTION;
            return view.isEmpty() && noneExpired ? Fate.ORPHAN : Fate.EXPIRED;
        }

        /** Which view it belonged to is forgotten; the latest trial that had arrived before it still tells something. */
        private Fate lateClick(StreamEvent click, int number) {
            Set<Long> arrived = new HashSet<>();
            events.subList(0, number).stream()
                    .filter(event -> event.isView() && !event.late())
                    .forEach(event -> arrived.add(event.id()));
            long latest = trials.stream()
                    .filter(trial -> arrived.contains(trial.id()))
                    .mapToLong(StreamEvent::atMillis)
                    .max()
                    .orElse(first.get().atMillis());
            return click.atMillis() > latest + ATTRIBUTION ? Fate.EXPIRED : Fate.LATE;
        }
    }

    private static Map<Long, Count> counts(List<StreamEvent> trials, Set<StreamEvent> successes) {
        TreeMap<Long, List<StreamEvent>> windows = new TreeMap<>();
        for (StreamEvent trial : trials) {
            windows.computeIfAbsent(Northwater.windowStart(trial.atMillis()), start -> new ArrayList<>())
                    .add(trial);
        }
        Map<Long, Count> counts = new LinkedHashMap<>();
        long trialsBefore = 0;
        long successesBefore = 0;
        for (Map.Entry<Long, List<StreamEvent>> window : windows.entrySet()) {
            long more = window.getValue().size();
            long clicked =
                    window.getValue().stream().filter(successes::contains).count();
            counts.put(window.getKey(), Count.ofUnit(trialsBefore, successesBefore, more, clicked));
            trialsBefore += more;
            successesBefore += clicked;
        }
        return counts;
    }
}
