package io.tallyward.engine.count;

import io.tallyward.engine.event.EventKind;
import io.tallyward.engine.event.EventSlot;
import io.tallyward.engine.event.NameTable;
import io.tallyward.engine.plan.Amendment;
import io.tallyward.engine.plan.CountRule.CountBy;
import io.tallyward.engine.plan.LateAmendmentException;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.PlanChangedException;
import io.tallyward.engine.plan.PlanDigest;
import java.time.Duration;
import java.time.Instant;
import java.util.ArrayList;
import java.util.List;
import java.util.Map;
import java.util.Optional;
import java.util.TreeMap;

/**
 * Counts one experiment in one partition: decides in which window an outcome is told, and seals windows in order. The
 * sealed part of the run is always a prefix of it: every window before {@link #sealedUntil()} is sealed, none after.
 */
final class ExperimentCounter {

    /**
     * How long after the end of a run is sealed its units are still remembered, in milliseconds of event time: until then events
     * that come late are told exactly what they are.
     */
    static final long ARCHIVE_AFTER = Duration.ofDays(1).toMillis();

    private Plan plan;
    private final String planDigest;
    private final long windowMillis;
    private final WindowGrid windows;
    private final long sealDelayMillis;
    private final long viewPatienceMillis;
    private final long runFrom;
    private long runEnd;
    private final byte[] unitKey;
    private final Optional<SegmentTable> segments;
    private CountLedger ledger;
    private boolean archived;

    private long sealedUntil;
    private final TreeMap<Long, OutcomeCounts.Builder> unsealedOutcomes = new TreeMap<>();
    private OutcomeCounts.Builder finalOutcomes = new OutcomeCounts.Builder();
    private boolean changed;
    private CountView.ExperimentCounts shown;

    /** How far the events of this process reached; a file replay ends there. */
    private long reach;

    /**
     * Counts under a plan.
     *
     * @param fields the segment fields that any plan names
     * @param unitKey key of the hash of what must not be told, here of the names of views
     */
    ExperimentCounter(Plan plan, NameTable fields, byte[] unitKey) {
        this.plan = plan;
        planDigest = PlanDigest.of(plan);
        windowMillis = plan.count().window().toMillis();
        windows = new WindowGrid(windowMillis);
        sealDelayMillis = plan.count().sealDelayMillis();
        viewPatienceMillis = plan.count().viewPatienceMillis();
        runFrom = plan.run().from().toEpochMilli();
        runEnd = plan.end().toEpochMilli();
        sealedUntil = runFrom;
        reach = sealedUntil;
        List<String> named = plan.splitCheck().segments();
        segments = named.isEmpty() ? Optional.empty() : Optional.of(new SegmentTable(named, fields));
        this.unitKey = unitKey;
        ledger = newLedger();
    }

    private CountLedger newLedger() {
        return plan.count().by() == CountBy.VIEW
                ? new ViewLedger(plan, segments, new UnitHasher(unitKey))
                : new Ledger(plan, segments);
    }

    /** A window that was just sealed, with the units whose trials fell into it, packed. */
    record Sealed(WindowTally tally, List<byte[]> units) {}

    Plan plan() {
        return plan;
    }

    String planDigest() {
        return planDigest;
    }

    /**
     * Goes on under the same plan with more amendments. Nothing that they change may have been sealed, and no event taken that
     * lies behind an end that was moved.
     *
     * @param latestEvent event time that no event so far is behind
     * @throws PlanChangedException when it is another plan
     * @throws LateAmendmentException when it is too late for an amendment
     */
    void amend(Plan amended, long latestEvent) {
        String digest = PlanDigest.of(amended);
        if (!digest.equals(planDigest)) {
            throw new PlanChangedException(plan.experiment(), planDigest, digest);
        }
        int known = plan.amendments().size();
        long end = amended.end().toEpochMilli();
        if (end != runEnd && latestEvent >= Math.min(end, runEnd)) {
            throw new LateAmendmentException(plan.experiment(), amended.end(), Instant.ofEpochMilli(latestEvent));
        }
        plan = amended;
        runEnd = end;
        requireInTime(known);
        change();
    }

    /**
     * Makes sure that nothing is sealed that an amendment changes.
     *
     * @param known how many amendments were known when it was sealed
     * @throws LateAmendmentException when it is too late for one of the others
     */
    void requireInTime(int known) {
        List<Amendment> all = plan.amendments();
        for (Amendment added : all.subList(Math.min(known, all.size()), all.size())) {
            if (added.at().toEpochMilli() < sealedUntil) {
                throw new LateAmendmentException(plan.experiment(), added.at(), Instant.ofEpochMilli(sealedUntil));
            }
        }
    }

    /** Whether nothing has been counted or sealed; there may have been events outside the run. */
    boolean isUntouched() {
        OutcomeCounts told = finalOutcomes.build();
        return sealedUntil == runFrom && told.total() == told.get(Outcome.OUTSIDE) && ledger.openEvents() == 0;
    }

    /** Counts on from an experiment of the same name that was untouched. */
    void succeed(OutcomeCounts outside) {
        restore(runFrom, outside, Map.of());
        change();
    }

    /** Whether an event time lies in the run. */
    boolean isInside(long atMillis) {
        return atMillis >= runFrom && atMillis < runEnd;
    }

    long sealedUntil() {
        return sealedUntil;
    }

    CountLedger ledger() {
        return ledger;
    }

    /** The segments that were seen, if the plan names any. */
    Optional<SegmentTable> segments() {
        return segments;
    }

    /** Takes an event of a known variant; returns whether it lies inside the run. */
    boolean accept(long high, long low, EventSlot event, long arrivalMillis) {
        change();
        if (!isInside(event.atMillis())) {
            finalOutcomes.add(Outcome.OUTSIDE, 1);
            reach = event.atMillis() >= runEnd ? runEnd : reach;
            return false;
        }
        long window = windowOf(event.atMillis());
        reach = Math.max(reach, window + windowMillis);
        if (archived) {
            finalOutcomes.add(Outcome.LATE, 1);
            return true;
        }
        boolean late = window < sealedUntil || arrivalMillis >= lateAt(window, event.kind());
        Outcome outcome = ledger.accept(high, low, event, arrivalMillis, late);
        if (outcome != null) {
            finalOutcomes.addOf(event.variant(), outcome);
            tellIn(window, event.variant(), outcome);
        }
        return true;
    }

    /** An outcome that became final on its own is told with its own window, or with the next one that is still open. */
    private void tellIn(long window, int variant, Outcome outcome) {
        long open = Math.max(window, sealedUntil);
        if (open < runEnd) {
            unsealedOutcomes
                    .computeIfAbsent(open, start -> new OutcomeCounts.Builder())
                    .addOf(variant, outcome);
        }
    }

    private long windowOf(long atMillis) {
        return windows.of(atMillis);
    }

    /** The watermark at which an event of a window comes too late for it. */
    private long lateAt(long windowStart, EventKind kind) {
        return kind == EventKind.VIEW ? windowStart + windowMillis + viewPatienceMillis : sealAt(windowStart);
    }

    private long sealAt(long windowStart) {
        return windowStart + windowMillis + sealDelayMillis;
    }

    /** End of the latest window in which anything happened; the end of the run if anything happened after it. */
    long reach() {
        return reach;
    }

    /** The watermark at which the next window is sealed or the units are archived; {@code Long.MAX_VALUE} after that. */
    long nextSealAt() {
        if (sealedUntil < runEnd) {
            return sealAt(sealedUntil);
        }
        return archived ? Long.MAX_VALUE : archiveAt();
    }

    private long archiveAt() {
        return runEnd + sealDelayMillis + ARCHIVE_AFTER;
    }

    /** Whether the run has been over for so long that its units need not be remembered. */
    boolean isToBeArchived(long watermark) {
        return !archived && sealedUntil >= runEnd && watermark >= archiveAt();
    }

    /** Forgets every unit. What still comes for the run is late, whatever it would have been. */
    void archive() {
        change();
        restoreArchived();
    }

    /** Puts it back as archived. */
    void restoreArchived() {
        archived = true;
        shown = null;
        segments.ifPresent(SegmentTable::clear);
        ledger = newLedger();
    }

    boolean isArchived() {
        return archived;
    }

    /** Seals every window that a watermark has passed; windows in which nothing happened are sealed without a trace. */
    List<Sealed> sealUpTo(long watermark) {
        return sealedUntil >= runEnd || watermark < nextSealAt()
                ? List.of()
                : sealThrough(windowOf(watermark - sealDelayMillis));
    }

    /** Seals every window that ends at or before a moment, whatever the watermark; at most to the end of the run. */
    List<Sealed> sealThrough(long moment) {
        long until = Math.min(runEnd, moment);
        List<Sealed> result = new ArrayList<>();
        if (until <= sealedUntil) {
            return result;
        }
        long next = nextToSeal();
        while (next < until) {
            Sealed window = seal(next);
            if (window.tally().outcomes().total() > 0) {
                result.add(window);
            }
            next = nextToSeal();
        }
        sealedUntil = until;
        change();
        return result;
    }

    /** The first window in which anything may have happened: a trial that was due in it may have moved away since. */
    private long nextToSeal() {
        long told = unsealedOutcomes.isEmpty() ? Long.MAX_VALUE : unsealedOutcomes.firstKey();
        return Math.min(told, ledger.firstDue());
    }

    private Sealed seal(long windowStart) {
        OutcomeCounts.Builder settled = new OutcomeCounts.Builder();
        WindowCounts counts = new WindowCounts(plan, segments);
        List<byte[]> units = ledger.seal(windowStart, settled, counts);
        OutcomeCounts fromLedger = settled.build();
        finalOutcomes.add(fromLedger);
        OutcomeCounts.Builder told = unsealedOutcomes.remove(windowStart);
        OutcomeCounts outcomes =
                told == null ? fromLedger : told.add(fromLedger).build();
        return new Sealed(new WindowTally(windowStart, counts.cells(), counts.segments(), outcomes), units);
    }

    private void change() {
        changed = true;
        shown = null;
    }

    /** Where it stands; the same object for as long as nothing happens. */
    CountView.ExperimentCounts view() {
        if (shown == null) {
            shown = new CountView.ExperimentCounts(outcomes(), ledger.openEvents(), ledger.units());
        }
        return shown;
    }

    /** Final outcomes of all events so far, sealed windows or not. */
    OutcomeCounts outcomes() {
        return finalOutcomes.build();
    }

    /** Outcomes that are final but belong to a window that is still open, by window start. */
    Map<Long, OutcomeCounts> unsealedOutcomes() {
        Map<Long, OutcomeCounts> result = new TreeMap<>();
        unsealedOutcomes.forEach((window, outcomes) -> result.put(window, outcomes.build()));
        return result;
    }

    /** Whether anything changed since {@link #takeChanged} was last asked. */
    boolean isChanged() {
        return changed;
    }

    /** Whether anything changed since this was last asked. */
    boolean takeChanged() {
        boolean result = changed;
        changed = false;
        return result;
    }

    void restoreOpen(ChunkReader in) {
        shown = null;
        ledger.restoreOpen(in);
    }

    void restoreSealed(ChunkReader in) {
        shown = null;
        ledger.restoreSealed(in);
    }

    void restore(long storedSealedUntil, OutcomeCounts storedOutcomes, Map<Long, OutcomeCounts> storedUnsealed) {
        sealedUntil = storedSealedUntil;
        shown = null;
        ledger.forgetDueBefore(sealedUntil);
        finalOutcomes = new OutcomeCounts.Builder().add(storedOutcomes);
        unsealedOutcomes.clear();
        storedUnsealed.forEach(
                (window, outcomes) -> unsealedOutcomes.put(window, new OutcomeCounts.Builder().add(outcomes)));
    }
}
