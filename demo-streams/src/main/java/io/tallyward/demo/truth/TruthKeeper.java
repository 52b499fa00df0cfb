package io.tallyward.demo.truth;

import io.tallyward.demo.story.Northwater;
import io.tallyward.demo.story.Season;
import io.tallyward.demo.story.Story;
import io.tallyward.demo.story.StreamEvent;
import java.util.Arrays;
import java.util.HashMap;
import java.util.LinkedHashMap;
import java.util.List;
import java.util.Map;

/**
 * Judges one unit after the other and keeps nothing but counts, so that any number of events will do. Not thread-safe.
 */
public final class TruthKeeper implements Season.Listener {

    private final int partitions;
    private final long[] latestMillis;
    private final Map<String, Long> rejects = new HashMap<>();
    private final Map<String, Judged> judged = new LinkedHashMap<>();

    /** All cells, also those of windows that may turn out not to be sealed, and how many events met each fate. */
    private record Judged(Story story, Map<Cell, Count> cells, long[] fates) {

        Judged(Story story) {
            this(story, new HashMap<>(), new long[Fate.values().length]);
        }
    }

    /** Nothing has been heard yet; units will be spread over a number of partitions. */
    public TruthKeeper(List<Story> stories, int partitions) {
        this.partitions = partitions;
        latestMillis = new long[partitions];
        Arrays.fill(latestMillis, Long.MIN_VALUE);
        stories.forEach(story -> judged.put(story.experiment(), new Judged(story)));
    }

    @Override
    public void flawed(StreamEvent event) {
        rejects.merge(event.flaw().reason(), 1L, Long::sum);
    }

    @Override
    public void unit(Story story, List<StreamEvent> events) {
        int partition = Truth.partition(events.get(0).subject().unit(), partitions);
        for (StreamEvent event : events) {
            if (story.runsAt(event.atMillis())) {
                latestMillis[partition] = Math.max(latestMillis[partition], event.atMillis());
            }
        }
        Judged counts = judged.get(story.experiment());
        if (story.countsByView()) {
            ViewVerdict verdict = ViewVerdict.of(story, events);
            tell(counts, verdict.fates());
            verdict.counts()
                    .forEach((window, count) -> counts.cells()
                            .merge(cell(story, verdict.firstView().get(), window, partition), count, Count::plus));
            return;
        }
        UnitVerdict verdict = UnitVerdict.of(story, events);
        tell(counts, verdict.fates());
        verdict.firstView()
                .ifPresent(view -> counts.cells()
                        .merge(
                                cell(story, view, Northwater.windowStart(view.atMillis()), partition),
                                new Count(1, verdict.success() ? 1 : 0),
                                Count::plus));
    }

    private static void tell(Judged counts, List<Fate> fates) {
        fates.forEach(fate -> counts.fates()[fate.ordinal()]++);
    }

    /** The truth about all units heard of. */
    public Truth truth() {
        Truth truth = new Truth(partitions, latestMillis, rejects);
        judged.values().forEach(counts -> truth.add(sealed(truth, counts)));
        return truth;
    }

    private static ExperimentTruth sealed(Truth truth, Judged counts) {
        Map<Cell, Count> cells = new HashMap<>();
        Map<String, Long> outcomes = new HashMap<>();
        for (Fate fate : Fate.values()) {
            outcomes.put(fate.code(), counts.fates()[fate.ordinal()]);
        }
        counts.cells().forEach((cell, count) -> {
            if (cell.windowStartMillis() < truth.sealedUntilMillis(cell.partition())) {
                cells.put(cell, count);
            } else {
                outcomes.merge(Fate.TRIAL.code(), -count.trials(), Long::sum);
            }
        });
        return new ExperimentTruth(counts.story(), cells, outcomes);
    }

    /** A unit belongs to the epoch and the variant of its first view. */
    private static Cell cell(Story story, StreamEvent firstView, long window, int partition) {
        return new Cell(
                partition,
                window,
                story.epochAt(firstView.atMillis()),
                story.variants().indexOf(firstView.subject().variant()));
    }
}
