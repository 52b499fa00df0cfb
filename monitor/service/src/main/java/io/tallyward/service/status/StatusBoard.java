package io.tallyward.service.status;

import io.tallyward.engine.count.Outcome;
import io.tallyward.engine.decide.ExperimentView;
import io.tallyward.engine.event.RejectReason;
import java.util.Collections;
import java.util.HashMap;
import java.util.LinkedHashMap;
import java.util.Map;
import java.util.Optional;
import java.util.SortedMap;
import java.util.TreeMap;

/**
 * Where shard hosts put their snapshots and readers find them. Thread-safe: writers exclude one another briefly, readers
 * see the last complete state; whoever first asks for totals after a publication adds them up.
 *
 * <p>A partition speaks for its experiments as a whole: what it publishes replaces what it published before, and what
 * it withdraws is gone, so that an experiment that moved to another instance leaves no stale twin. Should two partitions
 * name the same experiment, the one that published last is believed.
 */
public final class StatusBoard {

    private static final Outcome[] OUTCOMES = Outcome.values();

    /** Guarded by this; in the order of publication, newest last. */
    private final Map<Integer, Map<String, ExperimentView>> decided = new LinkedHashMap<>();

    /** Guarded by this. */
    private final SortedMap<Integer, CountReport> counted = new TreeMap<>();

    /** Guarded by this. */
    private final MonotoneTotals<String> events = new MonotoneTotals<>(OUTCOMES.length);

    /** Guarded by this. */
    private final MonotoneTotals<RejectReason> rejects = new MonotoneTotals<>(1);

    private volatile SortedMap<String, ExperimentView> experiments = Collections.emptySortedMap();

    /** Null after a publication, until somebody asks. */
    private volatile Counted counts;

    /** Replaces everything that a partition of the deciding side has said. */
    public synchronized void publishExperiments(int decidePartition, Map<String, ExperimentView> views) {
        decided.remove(decidePartition);
        decided.put(decidePartition, Map.copyOf(views));
        mergeDecided();
    }

    /** Forgets what a partition of the deciding side has said; nothing happens if it has said nothing. */
    public synchronized void withdrawDecide(int decidePartition) {
        decided.remove(decidePartition);
        mergeDecided();
    }

    /**
     * Publishes the report of a COUNT shard that has just been restored. Its totals were published by whoever counted
     * them, so the counters do not rise by them. Without this call the first report of a partition counts in full.
     */
    public synchronized void adoptCounts(int countPartition, CountReport restored) {
        counted.put(countPartition, restored);
        restored.experiments()
                .forEach((experiment, count) -> events.adopt(
                        countPartition, experiment, count.outcomes().toArray()));
        restored.rejected().forEach((reason, records) -> rejects.adopt(countPartition, reason, new long[] {records}));
        counts = null;
    }

    /** Replaces the report of a COUNT shard; the counters rise by what is new. */
    public synchronized void publishCounts(int countPartition, CountReport report) {
        CountReport before = counted.put(countPartition, report);
        report.experiments().forEach((experiment, count) -> {
            // Experiments to which nothing has happened are passed on as they were, and may be many.
            if (before == null || before.experiments().get(experiment) != count) {
                events.advance(countPartition, experiment, count.outcomes().toArray());
            }
        });
        report.rejected().forEach((reason, records) -> rejects.advance(countPartition, reason, new long[] {records}));
        counts = null;
    }

    /** Forgets the report of a COUNT shard; the counters keep what they have. */
    public synchronized void withdrawCount(int countPartition) {
        counted.remove(countPartition);
        counts = null;
    }

    /** The experiments this instance decides about, by name. Unmodifiable. */
    public SortedMap<String, ExperimentView> experiments() {
        return experiments;
    }

    /** One experiment; empty when this instance does not decide about it. */
    public Optional<ExperimentView> experiment(String name) {
        return Optional.ofNullable(experiments.get(name));
    }

    /** What this instance counts. */
    public Counted counts() {
        Counted added = counts;
        return added == null ? addUp() : added;
    }

    private synchronized Counted addUp() {
        Map<EventKey, Long> byOutcome = new HashMap<>();
        events.totals().forEach((experiment, row) -> {
            for (Outcome outcome : OUTCOMES) {
                byOutcome.put(new EventKey(experiment, outcome), row[outcome.ordinal()]);
            }
        });
        Map<RejectReason, Long> byReason = new HashMap<>();
        rejects.totals().forEach((reason, row) -> byReason.put(reason, row[0]));
        Counted added = new Counted(
                Collections.unmodifiableSortedMap(new TreeMap<>(counted)), Map.copyOf(byOutcome), Map.copyOf(byReason));
        counts = added;
        return added;
    }

    private void mergeDecided() {
        SortedMap<String, ExperimentView> merged = new TreeMap<>();
        decided.values().forEach(merged::putAll);
        experiments = Collections.unmodifiableSortedMap(merged);
    }

    /**
     * What this instance counts, at one moment.
     *
     * @param reports the latest report of each partition it owns, by partition
     * @param events events with a final outcome that this process has published; never falls
     * @param rejected records not admitted that this process has published, by reason; never falls
     */
    public record Counted(
            SortedMap<Integer, CountReport> reports, Map<EventKey, Long> events, Map<RejectReason, Long> rejected) {}

    /** An outcome of an experiment's events. */
    public record EventKey(String experiment, Outcome outcome) {}
}
