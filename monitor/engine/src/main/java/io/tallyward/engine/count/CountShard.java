package io.tallyward.engine.count;

import io.tallyward.engine.event.Event;
import io.tallyward.engine.event.EventSlot;
import io.tallyward.engine.event.NameTable;
import io.tallyward.engine.event.RejectReason;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.PlanBook;
import io.tallyward.engine.plan.PlanDigest;
import io.tallyward.engine.plan.PlanNames;
import io.tallyward.engine.shard.StateChange;
import java.util.ArrayList;
import java.util.Collection;
import java.util.EnumMap;
import java.util.LinkedHashMap;
import java.util.LinkedHashSet;
import java.util.List;
import java.util.Map;
import java.util.Optional;
import java.util.OptionalLong;
import java.util.Set;
import java.util.TreeSet;

/**
 * Counts one input partition. A pure state machine: the same records in the same order, with the same passages of time,
 * give the same tallies. Not thread-safe.
 *
 * <p>A host feeds it decoded events, lets time pass, and asks now and then for its {@linkplain #drain() effects}, which it
 * makes durable together with the offsets of what was read. After a restart the host hands the surviving state changes
 * back through {@link #restore} before the first event.
 */
public final class CountShard {

    /** The shard's own entry, and what else may stand among those of the experiments. */
    private static final int FORESIGHT = 16;

    private final int partition;
    private final int partitions;
    private final long maxSkewMillis;
    private final UnitHasher hasher;
    private final Watermarks watermarks;
    private final byte[] unitKey;
    private final Map<String, ExperimentCounter> counters = new LinkedHashMap<>();
    private final Set<String> unfrozen = new LinkedHashSet<>();
    private final List<String> segmentFields = new ArrayList<>();
    private PlanNames names;
    private ExperimentCounter[] countersByPosition;
    private final EventSlot slot = new EventSlot();
    private final Map<RejectReason, Long> rejected = new EnumMap<>(RejectReason.class);
    private final CountState state;
    private final SealedTallies tallies;

    private final List<StateChange> sealedState = new ArrayList<>();

    /** The experiments that something has happened to since the last drain, in the order in which it first did. */
    private final Set<ExperimentCounter> changed = new LinkedHashSet<>();

    private boolean shardChanged;

    /** Whether something was restored, of which an earlier archive may not have been removed to its end. */
    private boolean restoredToForget;

    private long nextSealAt = Long.MIN_VALUE;

    /**
     * A shard that has counted nothing yet.
     *
     * @param partition number of the input partition
     * @param partitions how many input partitions there are
     * @param plans the plans to count under, one per experiment, all of them frozen; more may be {@linkplain #adopt adopted}
     *     later
     * @param settings settings of the stream
     * @param sources names of the input topics that meet in this shard, each once, at least 1
     */
    public CountShard(
            int partition, int partitions, Collection<Plan> plans, CountSettings settings, List<String> sources) {
        if (!(sources.size() >= 1 && Set.copyOf(sources).size() == sources.size())) {
            throw new IllegalArgumentException("sources: " + sources + " (expected: at least 1, each once)");
        }
        this.partition = partition;
        this.partitions = partitions;
        maxSkewMillis = settings.maxSkew().toMillis();
        hasher = new UnitHasher(settings.unitKey());
        watermarks = new Watermarks(sources, settings.idleAfter().toMillis());
        state = new CountState(partitions, hasher.keyFingerprint());
        tallies = new SealedTallies(partition, partitions);
        unitKey = settings.unitKey();
        adopt(plans.stream().map(plan -> new PlanBook.Entry(plan, true)).toList());
        for (RejectReason reason : RejectReason.values()) {
            rejected.put(reason, 0L);
        }
    }

    /**
     * Applies one earlier state change.
     *
     * @throws io.tallyward.engine.plan.PlanChangedException when an experiment was counted under another plan
     * @throws PartitionsChangedException when the input topics had another number of partitions
     * @throws UnitKeyChangedException when units were hashed under another key
     */
    public void restore(byte[] key, byte[] value) {
        state.restore(key, value, watermarks, rejected, counters);
        nextSealAt = Long.MIN_VALUE;
        restoredToForget = true;
    }

    /**
     * How many of the last state changes {@link #foresee} should be shown: as many as the last commit with all experiments in
     * it ends in.
     */
    public int foresight() {
        return 2 * counters.size() + FORESIGHT;
    }

    /**
     * Shows one of the last state changes before the first is restored, so that what they make void need not be restored.
     * What is not foreseen makes no difference but of time.
     */
    public void foresee(byte[] key, byte[] value) {
        state.foresee(key, value);
    }

    /** Whether what was restored may hold anything of an input topic; true where nothing was. */
    public boolean hasRead(String source) {
        return watermarks.hasRead(source);
    }

    /** The experiments and variants that are counted here, by position; another object once other plans are adopted. */
    public PlanNames names() {
        return names;
    }

    /**
     * Takes over what stands in the book of plans: counts experiments that are new, under another plan those of which nothing
     * has been counted, and the others under their amendments. Experiments that are not named stay as they are.
     *
     * @throws io.tallyward.engine.plan.PlanChangedException when an experiment was counted under another plan
     * @throws io.tallyward.engine.plan.LateAmendmentException when it is too late for an amendment
     */
    public void adopt(Collection<PlanBook.Entry> entries) {
        addSegmentFields(entries);
        NameTable fields = new NameTable(segmentFields);
        boolean renamed = names == null;
        for (PlanBook.Entry entry : entries) {
            Plan plan = entry.plan();
            ExperimentCounter present = counters.get(plan.experiment());
            if (present == null || isOther(plan, present)) {
                changed.remove(present);
                counters.put(plan.experiment(), successor(plan, fields, present));
                renamed = true;
            } else if (!plan.equals(present.plan())) {
                present.amend(plan, watermarks.latest());
            }
            if (entry.frozen()) {
                unfrozen.remove(plan.experiment());
            } else {
                unfrozen.add(plan.experiment());
            }
        }
        if (renamed) {
            names = PlanNames.of(
                    counters.values().stream().map(ExperimentCounter::plan).toList(), segmentFields);
            countersByPosition = counters.values().toArray(ExperimentCounter[]::new);
        }
        counters.values().stream().filter(ExperimentCounter::isChanged).forEach(changed::add);
        nextSealAt = Long.MIN_VALUE;
        if (watermarks.slowest() != Watermarks.NONE && sealPassed()) {
            shardChanged = true;
        }
    }

    private ExperimentCounter successor(Plan plan, NameTable fields, ExperimentCounter presentOrNull) {
        ExperimentCounter counter = new ExperimentCounter(plan, fields, unitKey);
        if (presentOrNull != null) {
            counter.succeed(presentOrNull.outcomes());
        }
        return counter;
    }

    private static boolean isOther(Plan plan, ExperimentCounter present) {
        return !plan.equals(present.plan())
                && present.isUntouched()
                && !PlanDigest.of(plan).equals(present.planDigest());
    }

    /** Fields keep their positions, as units refer to them. */
    private void addSegmentFields(Collection<PlanBook.Entry> entries) {
        Set<String> added = new TreeSet<>();
        entries.forEach(entry -> added.addAll(entry.plan().splitCheck().segments()));
        segmentFields.forEach(added::remove);
        segmentFields.addAll(added);
    }

    /**
     * Whether the plan of an experiment has to be frozen before an event of it may be {@linkplain #apply taken}.
     *
     * @param experiment its position among the {@link #names}
     * @param atMillis event time
     * @param recordTimestampMillis when the event reached the log; one from a clock that is ahead is rejected and freezes nothing
     */
    public boolean mustFreeze(int experiment, long atMillis, long recordTimestampMillis) {
        if (unfrozen.isEmpty() || atMillis > recordTimestampMillis + maxSkewMillis) {
            return false;
        }
        ExperimentCounter counter = countersByPosition[experiment];
        return counter.isInside(atMillis) && unfrozen.contains(counter.plan().experiment());
    }

    /** The experiments with plans that are not frozen although their runs have begun by some event time. */
    public List<String> begunUnfrozen(long atMillis) {
        return unfrozen.stream()
                .filter(experiment -> counters.get(experiment).isInside(atMillis))
                .toList();
    }

    /** Experiments of which there is state that was not restored, as no plan was known. */
    public Set<String> unplannedState() {
        return state.unplanned();
    }

    /**
     * The experiments whose first window would be sealed, were their plans frozen: nothing of it has been seen, which has to be
     * told.
     */
    public List<String> dueToFreeze() {
        if (unfrozen.isEmpty() || watermarks.slowest() == Watermarks.NONE) {
            return List.of();
        }
        return unfrozen.stream()
                .filter(experiment -> counters.get(experiment).nextSealAt() <= watermarks.slowest())
                .toList();
    }

    /**
     * Takes one event.
     *
     * @param source index of the input topic it came from
     * @param recordTimestampMillis when it reached the log, by the record's timestamp
     * @return why it was rejected; empty when it was admitted
     */
    public Optional<RejectReason> apply(int source, long recordTimestampMillis, Event event) {
        int experiment = names.experiment(event.experiment());
        if (experiment < 0) {
            return Optional.of(reject(RejectReason.UNKNOWN_EXPERIMENT));
        }
        int variant = names.variant(experiment, event.variant());
        if (variant < 0) {
            return Optional.of(reject(RejectReason.UNKNOWN_VARIANT));
        }
        slot.take(event, experiment, variant, names.segments());
        return apply(source, recordTimestampMillis, slot);
    }

    /**
     * Takes one event of a known experiment and variant; nothing of the slot is kept.
     *
     * @param source index of the input topic it came from
     * @param recordTimestampMillis when it reached the log, by the record's timestamp
     * @return why it was rejected; empty when it was admitted
     */
    public Optional<RejectReason> apply(int source, long recordTimestampMillis, EventSlot event) {
        if (event.atMillis() > recordTimestampMillis + maxSkewMillis) {
            return Optional.of(reject(RejectReason.BAD_TIME));
        }
        hasher.hash(event.unit(), 0, event.unitLength());
        ExperimentCounter counter = countersByPosition[event.experiment()];
        if (!counter.isChanged()) {
            changed.add(counter);
        }
        boolean inside = counter.accept(hasher.high(), hasher.low(), event, watermarks.of(source));
        if (inside && watermarks.advance(source, event.atMillis())) {
            shardChanged = true;
            sealPassed();
        }
        return Optional.empty();
    }

    /** Counts a record that could not be read as an event. */
    public RejectReason reject(RejectReason reason) {
        rejected.merge(reason, 1L, Long::sum);
        shardChanged = true;
        return reason;
    }

    /**
     * Lets the wall clock pass.
     *
     * @param source index of an input topic
     * @param nowMillis the wall clock
     * @param caughtUp whether everything in this source has been read; only then can it be idle
     */
    public void passTime(int source, long nowMillis, boolean caughtUp) {
        if (watermarks.passTime(source, nowMillis, caughtUp) && sealPassed()) {
            shardChanged = true;
        }
    }

    /**
     * How far the events of each experiment reached, by name: the end of the latest window in which anything happened, or
     * the end of the run if anything happened after it. Milliseconds since the epoch.
     */
    public Map<String, Long> reach() {
        Map<String, Long> reach = new LinkedHashMap<>();
        counters.forEach((name, counter) -> reach.put(name, counter.reach()));
        return reach;
    }

    /**
     * Seals everything up to a moment per experiment: the input has come to its end and nothing more can arrive. The host
     * names the farthest {@link #reach} of all partitions, so that the windows of every partition are complete.
     */
    public void endOfInput(Map<String, Long> reach) {
        counters.forEach((name, counter) -> endOfInput(counter, reach.get(name)));
    }

    /** Seals the whole run of every experiment: nothing more can arrive. */
    public void endOfInput() {
        counters.values().forEach(counter -> endOfInput(counter, Long.MAX_VALUE));
    }

    private void endOfInput(ExperimentCounter counter, long moment) {
        long before = counter.sealedUntil();
        tell(counter, before, SealCause.END, counter.sealThrough(moment));
    }

    /** Seals what the watermarks have passed; returns whether that was anything. */
    private boolean sealPassed() {
        long watermark = watermarks.slowest();
        if (watermark < nextSealAt) {
            return false;
        }
        SealCause cause = watermarks.slowestIsAssumed() ? SealCause.IDLE : SealCause.WATERMARK;
        nextSealAt = Long.MAX_VALUE;
        for (ExperimentCounter counter : counters.values()) {
            if (unfrozen.contains(counter.plan().experiment())) {
                continue;
            }
            seal(counter, watermark, cause);
            if (counter.isToBeArchived(watermark)) {
                sealedState.addAll(CountState.forgetSegments(counter));
                counter.archive();
                changed.add(counter);
            }
            nextSealAt = Math.min(nextSealAt, counter.nextSealAt());
        }
        return true;
    }

    private void seal(ExperimentCounter counter, long watermark, SealCause cause) {
        long before = counter.sealedUntil();
        tell(counter, before, cause, counter.sealUpTo(watermark));
    }

    private void tell(ExperimentCounter counter, long before, SealCause cause, List<ExperimentCounter.Sealed> windows) {
        if (counter.sealedUntil() == before) {
            return;
        }
        changed.add(counter);
        String experiment = counter.plan().experiment();
        windows.forEach(window -> sealedState.addAll(state.sealed(counter, window)));
        sealedState.addAll(state.forgetOpenBefore(experiment, counter.sealedUntil()));
        tallies.add(counter, cause, windows);
    }

    /** Everything to be made durable since this was last asked. */
    public CountEffects drain() {
        List<StateChange> changes = new ArrayList<>(sealedState);
        sealedState.clear();
        if (restoredToForget) {
            counters.values().stream()
                    .filter(counter -> counter.isChanged() || state.hasMoreToForget(counter))
                    .forEach(changed::add);
            restoredToForget = false;
        }
        for (ExperimentCounter counter : changed) {
            changes.addAll(CountState.segments(counter));
            changes.addAll(state.open(counter));
            changes.addAll(state.forgetSealed(counter));
        }
        // These come last, so that a log ends in how far everything has come.
        for (ExperimentCounter counter : changed) {
            if (counter.takeChanged()) {
                changes.add(CountState.experiment(counter));
            }
        }
        changed.removeIf(counter -> !state.hasMoreToForget(counter));
        if (shardChanged || watermarks.haveNewSources()) {
            changes.add(state.shard(watermarks, rejected));
            shardChanged = false;
        }
        return new CountEffects(changes, tallies.take(counters));
    }

    /** Where the shard stands. */
    public CountView view() {
        Map<String, CountView.ExperimentCounts> experiments = new LinkedHashMap<>();
        counters.forEach((name, counter) -> experiments.put(name, counter.view()));
        long watermark = watermarks.slowest();
        return new CountView(
                partition,
                experiments,
                rejected,
                watermark == Watermarks.NONE ? OptionalLong.empty() : OptionalLong.of(watermark));
    }

    /** How many input partitions the shard believes there are. */
    public int partitions() {
        return partitions;
    }
}
