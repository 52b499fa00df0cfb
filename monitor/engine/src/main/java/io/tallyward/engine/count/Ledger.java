package io.tallyward.engine.count;

import io.tallyward.engine.event.Event;
import io.tallyward.engine.event.EventKind;
import io.tallyward.engine.plan.Plan;
import java.util.HashMap;
import java.util.LinkedHashMap;
import java.util.LinkedHashSet;
import java.util.Map;
import java.util.Set;
import java.util.TreeMap;

/**
 * Every unit of one experiment in one partition: the open ones with what may still change, the sealed ones with what must
 * be remembered of them. The ledger says what became of an event as soon as that is final.
 */
final class Ledger {

    private final long attributionMillis;
    private final long windowMillis;
    private final long sealDelayMillis;
    private final int variants;

    private final Map<UnitHash, OpenUnit> open = new HashMap<>();
    private final Map<UnitHash, SealedUnit> sealed = new HashMap<>();
    private final TreeMap<Long, Set<UnitHash>> due = new TreeMap<>();
    private final Set<UnitHash> changed = new LinkedHashSet<>();

    Ledger(Plan plan) {
        attributionMillis = plan.count().attribution().toMillis();
        windowMillis = plan.count().window().toMillis();
        sealDelayMillis = plan.count().sealDelayMillis();
        variants = plan.variants().size();
    }

    /**
     * Takes an event of the run.
     *
     * @param arrivalMillis watermark of the event's source when the event arrived
     * @param late whether the event's own window is sealed, in the shard or by the reckoning of the event's source
     * @return its outcome when that is final at once, or null while it can still change
     */
    Outcome accept(UnitHash hash, Event event, int variant, long arrivalMillis, boolean late) {
        SealedUnit settled = sealed.get(hash);
        if (settled != null) {
            return event.kind() == EventKind.VIEW
                    ? exposeAgain(settled, variant, event.atMillis())
                    : clickAfterwards(settled, variant, event.atMillis());
        }
        return event.kind() == EventKind.VIEW
                ? expose(hash, event, variant, late)
                : click(hash, event, variant, arrivalMillis, late);
    }

    private Outcome expose(UnitHash hash, Event event, int variant, boolean late) {
        OpenUnit unit = open.get(hash);
        if (late && (unit == null || !unit.hasTrial() || event.atMillis() < unit.first())) {
            return Outcome.LATE;
        }
        if (late) {
            unit.exposeAgain(variant);
            changed.add(hash);
            return null;
        }
        unit = unit == null ? new OpenUnit(variants) : unit;
        unit.expose(variant, event.atMillis(), identity(event), attributionMillis);
        put(hash, unit);
        return null;
    }

    private Outcome click(UnitHash hash, Event event, int variant, long arrivalMillis, boolean late) {
        OpenUnit unit = open.get(hash);
        boolean preceded = unit != null && unit.hasTrial() && unit.first() <= event.atMillis();
        if (late && !preceded) {
            return Outcome.ORPHAN;
        }
        unit = unit == null ? new OpenUnit(variants) : unit;
        unit.click(variant, event.atMillis(), arrivalMillis, attributionMillis);
        put(hash, unit);
        if (!preceded) {
            dueAt(windowOf(event.atMillis()), hash);
        }
        return null;
    }

    private static String identity(Event event) {
        return event.source().isEmpty() ? event.id() : event.id() + "\n" + event.source();
    }

    private static Outcome exposeAgain(SealedUnit unit, int variant, long atMillis) {
        if (atMillis < unit.first()) {
            return Outcome.LATE;
        }
        return variant == unit.variant() ? Outcome.REPEAT : Outcome.CROSSOVER;
    }

    private Outcome clickAfterwards(SealedUnit unit, int variant, long atMillis) {
        if (atMillis < unit.first()) {
            return Outcome.ORPHAN;
        }
        if (variant != unit.variant()) {
            return Outcome.CROSSOVER;
        }
        if (atMillis > unit.first() + attributionMillis) {
            return Outcome.EXPIRED;
        }
        return unit.success() ? Outcome.REPEAT : Outcome.LATE;
    }

    private void put(UnitHash hash, OpenUnit unit) {
        open.put(hash, unit);
        changed.add(hash);
        if (unit.hasTrial()) {
            dueAt(windowOf(unit.first()), hash);
        }
    }

    private void dueAt(long window, UnitHash hash) {
        due.computeIfAbsent(window, start -> new LinkedHashSet<>()).add(hash);
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
     * @return the units sealed, in the order in which they were first seen
     */
    Map<UnitHash, SealedUnit> seal(long windowStart, OutcomeCounts.Builder outcomes) {
        Set<UnitHash> hashes = due.remove(windowStart);
        Map<UnitHash, SealedUnit> result = new LinkedHashMap<>();
        if (hashes == null) {
            return result;
        }
        for (UnitHash hash : hashes) {
            OpenUnit unit = open.get(hash);
            if (unit == null) {
                continue;
            }
            if (unit.hasTrial() && windowOf(unit.first()) == windowStart) {
                long sealAt = windowStart + windowMillis + sealDelayMillis;
                unit.settle(sealAt, outcomes);
                SealedUnit settled = new SealedUnit(unit.variant(), unit.first(), unit.successful(sealAt));
                addSealed(hash, settled);
                changed.remove(hash);
                result.put(hash, settled);
            } else {
                dropOrphans(hash, unit, windowStart + windowMillis, outcomes);
            }
        }
        return result;
    }

    private void dropOrphans(UnitHash hash, OpenUnit unit, long before, OutcomeCounts.Builder outcomes) {
        int orphans = unit.removeOrphansBefore(before);
        if (orphans == 0) {
            return;
        }
        outcomes.add(Outcome.ORPHAN, orphans);
        if (unit.isEmpty()) {
            open.remove(hash);
            changed.remove(hash);
        } else {
            changed.add(hash);
        }
    }

    /** Open units that changed since this was last asked, by the window in which they fall due. */
    TreeMap<Long, Map<UnitHash, OpenUnit>> takeChanged() {
        TreeMap<Long, Map<UnitHash, OpenUnit>> byWindow = new TreeMap<>();
        for (UnitHash hash : changed) {
            OpenUnit unit = open.get(hash);
            byWindow.computeIfAbsent(dueWindow(unit), start -> new LinkedHashMap<>())
                    .put(hash, unit);
        }
        changed.clear();
        return byWindow;
    }

    /** Restores an open unit as it was written; a later version of the same unit replaces it. */
    void restoreOpen(UnitHash hash, OpenUnit unit) {
        open.put(hash, unit);
        if (unit.hasTrial()) {
            dueAt(windowOf(unit.first()), hash);
        }
        for (long click : unit.clickTimes()) {
            if (!unit.hasTrial() || click < unit.first()) {
                dueAt(windowOf(click), hash);
            }
        }
    }

    /**
     * Forgets restored versions of units that were replaced or gone when the windows before a moment were sealed: clicks
     * that became orphans leave an entry behind, which a log that is not compacted yet still holds.
     */
    void forgetDueBefore(long sealedUntilMillis) {
        Map<Long, Set<UnitHash>> past = due.headMap(sealedUntilMillis);
        past.values()
                .forEach(hashes -> hashes.forEach(hash -> {
                    OpenUnit unit = open.get(hash);
                    if (unit != null && dueWindow(unit) < sealedUntilMillis) {
                        open.remove(hash);
                    }
                }));
        past.clear();
    }

    /** Adds a unit whose trial is final. */
    void addSealed(UnitHash hash, SealedUnit unit) {
        open.remove(hash);
        sealed.put(hash, unit);
    }

    /** Events whose outcome can still change. */
    long openEvents() {
        return open.values().stream().mapToLong(OpenUnit::events).sum();
    }

    /** How many units are remembered, open and sealed. */
    int units() {
        return open.size() + sealed.size();
    }
}
