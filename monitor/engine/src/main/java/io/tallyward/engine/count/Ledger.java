package io.tallyward.engine.count;

import io.tallyward.engine.event.EventKind;
import io.tallyward.engine.event.EventSlot;
import io.tallyward.engine.plan.Plan;
import java.io.DataInput;
import java.io.IOException;
import java.util.Optional;
import java.util.TreeMap;

/**
 * Every unit of one experiment in one partition: the open ones with what may still change, the sealed ones with what must
 * be remembered of them. The ledger says what became of an event as soon as that is final.
 */
final class Ledger {

    private final long attributionMillis;
    private final long windowMillis;
    private final long sealDelayMillis;

    private final Optional<SegmentTable> segments;
    private final OpenUnits open;
    private final SealedUnits sealed;
    private final TreeMap<Long, PrefixList> due = new TreeMap<>();
    private final HashList changed = new HashList();
    private final OpenUnit restoring;
    private long openEvents;

    /** Most units fall due in the window of the unit before. */
    private long lastDue = Long.MIN_VALUE;

    private PrefixList lastDuePrefixes;

    /** @param segments where the segments of exposures are, if the plan names any */
    Ledger(Plan plan, Optional<SegmentTable> segments) {
        this.segments = segments;
        attributionMillis = plan.count().attribution().toMillis();
        windowMillis = plan.count().window().toMillis();
        sealDelayMillis = plan.count().sealDelayMillis();
        long runFrom = plan.run().from().toEpochMilli();
        open = new OpenUnits(runFrom, plan.variants().size(), segments.isPresent());
        sealed = new SealedUnits(runFrom);
        restoring = new OpenUnit(plan.variants().size());
    }

    /** Takes a unit whose trial has become final. */
    @FunctionalInterface
    interface Settled {
        /** @param segments code of the segments of the unit's first exposure */
        void take(long high, long low, int variant, long first, boolean success, int segments);
    }

    /** Takes an open unit that has changed; the unit is valid during the call only. */
    @FunctionalInterface
    interface Changed {
        /** @param window start of the window with which the last of what is open about the unit is sealed */
        void take(long window, long high, long low, OpenUnit unit);
    }

    /**
     * Takes an event of the run.
     *
     * @param high first half of the unit's hash
     * @param low second half
     * @param arrivalMillis watermark of the event's source when the event arrived
     * @param late whether the event's own window is sealed, in the shard or by the reckoning of the event's source
     * @return its outcome when that is final at once, or null while it can still change
     */
    Outcome accept(long high, long low, EventSlot event, long arrivalMillis, boolean late) {
        int variant = event.variant();
        boolean view = event.kind() == EventKind.VIEW;
        // A unit is open or sealed, never both; most events are about open ones.
        boolean known = open.find(high, low);
        if (!known && sealed.find(high, low)) {
            return view ? exposeAgain(variant, event.atMillis()) : clickAfterwards(variant, event.atMillis());
        }
        Outcome outcome =
                view ? expose(high, low, event, known, late) : click(high, low, event, arrivalMillis, known, late);
        openEvents += outcome == null ? 1 : 0;
        return outcome;
    }

    private Outcome expose(long high, long low, EventSlot event, boolean known, boolean late) {
        if (!known && late) {
            return Outcome.LATE;
        }
        OpenUnit unit = known ? open.load() : open.fresh();
        boolean had = unit.hasTrial();
        long before = unit.first();
        if (late) {
            if (!had || event.atMillis() < before) {
                return Outcome.LATE;
            }
            unit.exposeAgain(event.variant());
        } else if (unit.expose(event.variant(), event.atMillis(), event.tie(), attributionMillis)
                && segments.isPresent()) {
            unit.segments(segments.get().code(event));
        }
        if (!had || windowOf(before) != windowOf(unit.first())) {
            dueAt(windowOf(unit.first()), high);
        }
        put(high, low, unit, known);
        return null;
    }

    private Outcome click(long high, long low, EventSlot event, long arrivalMillis, boolean known, boolean late) {
        if (!known && late) {
            return Outcome.ORPHAN;
        }
        OpenUnit unit = known ? open.load() : open.fresh();
        boolean preceded = unit.hasTrial() && unit.first() <= event.atMillis();
        if (late && !preceded) {
            return Outcome.ORPHAN;
        }
        int clicks = unit.clicks();
        unit.click(event.variant(), event.atMillis(), arrivalMillis, attributionMillis);
        if (!preceded && unit.clicks() > clicks) {
            dueAt(windowOf(event.atMillis()), high);
        }
        put(high, low, unit, known);
        return null;
    }

    private void put(long high, long low, OpenUnit unit, boolean known) {
        if (open.store(high, low, unit, known)) {
            changed.add(high, low);
        }
    }

    private Outcome exposeAgain(int variant, long atMillis) {
        if (atMillis < sealed.first()) {
            return Outcome.LATE;
        }
        return variant == sealed.variant() ? Outcome.REPEAT : Outcome.CROSSOVER;
    }

    private Outcome clickAfterwards(int variant, long atMillis) {
        if (atMillis < sealed.first()) {
            return Outcome.ORPHAN;
        }
        if (variant != sealed.variant()) {
            return Outcome.CROSSOVER;
        }
        if (atMillis > sealed.first() + attributionMillis) {
            return Outcome.EXPIRED;
        }
        return sealed.success() ? Outcome.REPEAT : Outcome.LATE;
    }

    private void dueAt(long window, long high) {
        if (window != lastDue) {
            lastDuePrefixes = due.computeIfAbsent(window, start -> new PrefixList());
            lastDue = window;
        }
        lastDuePrefixes.add(high);
    }

    /** The window with which the last of what is open about a unit is sealed. */
    private long dueWindow(OpenUnit unit) {
        return windowOf(unit.hasTrial() ? unit.first() : unit.latestClick());
    }

    private long windowOf(long atMillis) {
        return Math.floorDiv(atMillis, windowMillis) * windowMillis;
    }

    /** The first window in which anything falls due, or {@code Long.MAX_VALUE} when nothing does. */
    long firstDue() {
        return due.isEmpty() ? Long.MAX_VALUE : due.firstKey();
    }

    /**
     * Seals a window: its trials become final, and clicks in it that no exposure precedes become orphans.
     *
     * @param outcomes receives the outcomes that become final
     * @param settled receives the units sealed, in an order that the events before determine
     */
    void seal(long windowStart, OutcomeCounts.Builder outcomes, Settled settled) {
        PrefixList prefixes = due.remove(windowStart);
        lastDue = Long.MIN_VALUE;
        for (int i = 0; prefixes != null && i < prefixes.size(); i++) {
            int prefix = prefixes.get(i);
            boolean more = open.findFirst(prefix);
            while (more) {
                more = sealFound(windowStart, outcomes, settled) ? open.holds(prefix) : open.next(prefix);
            }
        }
    }

    /** Seals what falls due of the unit last found; returns whether the unit is open no longer. */
    private boolean sealFound(long windowStart, OutcomeCounts.Builder outcomes, Settled settled) {
        OpenUnit unit = open.load();
        if (unit.hasTrial() && windowOf(unit.first()) == windowStart) {
            long sealAt = windowStart + windowMillis + sealDelayMillis;
            openEvents -= unit.events();
            unit.settle(sealAt, outcomes);
            boolean success = unit.successful(sealAt);
            sealed.add(open.high(), open.low(), unit.variant(), unit.first(), success);
            settled.take(open.high(), open.low(), unit.variant(), unit.first(), success, unit.segments());
            open.remove();
            return true;
        }
        int orphans = unit.removeOrphansBefore(windowStart + windowMillis);
        if (orphans == 0) {
            return false;
        }
        openEvents -= orphans;
        outcomes.add(Outcome.ORPHAN, orphans);
        if (unit.isEmpty()) {
            open.remove();
            return true;
        }
        put(open.high(), open.low(), unit, true);
        return false;
    }

    /** Tells the open units that changed since this was last asked. */
    void takeChanged(Changed taker) {
        for (int i = 0; i < changed.size(); i++) {
            if (open.find(changed.high(i), changed.low(i)) && open.isMarked()) {
                open.unmark();
                OpenUnit unit = open.load();
                taker.take(dueWindow(unit), changed.high(i), changed.low(i), unit);
            }
        }
        changed.clear();
    }

    /** A unit to restore into, always the same. */
    OpenUnit restoring() {
        return restoring;
    }

    /** Restores an open unit as it was written; a later version of the same unit replaces it. */
    void restoreOpen(long high, long low, OpenUnit unit) {
        boolean known = open.find(high, low);
        openEvents += unit.events() - (known ? open.load().events() : 0);
        open.store(high, low, unit, known);
        open.unmark();
        if (unit.hasTrial()) {
            dueAt(windowOf(unit.first()), high);
        }
        for (int click = 0; click < unit.clicks(); click++) {
            long at = unit.clickTime(click);
            if (!unit.hasTrial() || at < unit.first()) {
                dueAt(windowOf(at), high);
            }
        }
    }

    private void forgetOpen(long high, long low) {
        if (open.find(high, low)) {
            openEvents -= open.load().events();
            open.remove();
        }
    }

    /**
     * Forgets restored versions of units that were replaced or gone when the windows before a moment were sealed: clicks
     * that became orphans leave an entry behind, which a log that is not compacted yet still holds.
     */
    void forgetDueBefore(long sealedUntilMillis) {
        due.headMap(sealedUntilMillis).values().forEach(prefixes -> {
            for (int i = 0; i < prefixes.size(); i++) {
                forgetDueBefore(prefixes.get(i), sealedUntilMillis);
            }
        });
        due.headMap(sealedUntilMillis).clear();
        lastDue = Long.MIN_VALUE;
    }

    private void forgetDueBefore(int prefix, long sealedUntilMillis) {
        boolean more = open.findFirst(prefix);
        while (more) {
            OpenUnit unit = open.load();
            if (dueWindow(unit) < sealedUntilMillis) {
                openEvents -= unit.events();
                open.remove();
                more = open.holds(prefix);
            } else {
                more = open.next(prefix);
            }
        }
    }

    /** The sealed units, for their durable form. */
    SealedUnits sealed() {
        return sealed;
    }

    /** Restores a unit whose trial is final from its durable form. */
    void restoreSealed(DataInput in) throws IOException {
        sealed.read(in);
        forgetOpen(sealed.high(), sealed.low());
    }

    /** Events whose outcome can still change. */
    long openEvents() {
        return openEvents;
    }

    /** How many units are remembered, open and sealed. */
    int units() {
        return open.size() + sealed.size();
    }
}
