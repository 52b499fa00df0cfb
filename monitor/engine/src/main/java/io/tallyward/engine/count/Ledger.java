package io.tallyward.engine.count;

import io.tallyward.engine.event.EventKind;
import io.tallyward.engine.event.EventSlot;
import io.tallyward.engine.plan.Plan;
import java.util.List;
import java.util.Optional;
import java.util.TreeMap;

/**
 * The units of an experiment that counts by unit: the open ones with what may still change, the sealed ones with what must be
 * remembered of them.
 */
final class Ledger implements CountLedger {

    private final long attributionMillis;
    private final long windowMillis;
    private final long sealDelayMillis;

    private final WindowGrid windows;
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
        windows = new WindowGrid(windowMillis);
        long runFrom = plan.run().from().toEpochMilli();
        open = new OpenUnits(runFrom, plan.variants().size(), segments.isPresent());
        sealed = new SealedUnits(runFrom);
        restoring = new OpenUnit(plan.variants().size());
    }

    @Override
    public Outcome accept(long high, long low, EventSlot event, long arrivalMillis, boolean late) {
        int variant = event.variant();
        boolean view = event.kind() == EventKind.VIEW;
        // A unit is open or sealed, never both; most events are about open ones.
        boolean known = open.find(high, low);
        if (!known && sealed.find(high, low)) {
            return view ? exposeAgain(variant, event.atMillis()) : clickAfterwards(variant, event.atMillis());
        }
        if (known && view && open.isFurtherView(variant, event.atMillis())) {
            countFurtherView(high, low);
            return null;
        }
        Outcome outcome =
                view ? expose(high, low, event, known, late) : click(high, low, event, arrivalMillis, known, late);
        openEvents += outcome == null ? 1 : 0;
        return outcome;
    }

    /** The most frequent event by far; late or not, it can only become a repeat. */
    private void countFurtherView(long high, long low) {
        if (open.addFurtherView()) {
            changed.add(high, low);
        }
        openEvents++;
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
        return windows.of(atMillis);
    }

    @Override
    public long firstDue() {
        return due.isEmpty() ? Long.MAX_VALUE : due.firstKey();
    }

    /** Its trials become final, and clicks in it that no exposure precedes become orphans. */
    @Override
    public List<byte[]> seal(long windowStart, OutcomeCounts.Builder outcomes, WindowCounts counts) {
        SealedChunks chunks = new SealedChunks();
        PrefixList prefixes = due.remove(windowStart);
        lastDue = Long.MIN_VALUE;
        for (int i = 0; prefixes != null && i < prefixes.size(); i++) {
            int prefix = prefixes.get(i);
            boolean more = open.findFirst(prefix);
            while (more) {
                boolean removed = sealFound(windowStart, outcomes, counts, chunks);
                more = removed ? open.holds(prefix) : open.next(prefix);
            }
        }
        return chunks.take();
    }

    /** Seals what falls due of the unit last found; returns whether the unit is open no longer. */
    private boolean sealFound(
            long windowStart, OutcomeCounts.Builder outcomes, WindowCounts counts, SealedChunks chunks) {
        OpenUnit unit = open.load();
        if (unit.hasTrial() && windowOf(unit.first()) == windowStart) {
            long sealAt = windowStart + windowMillis + sealDelayMillis;
            openEvents -= unit.events();
            unit.settle(sealAt, outcomes);
            boolean success = unit.successful(sealAt);
            sealed.add(open.high(), open.low(), unit.variant(), unit.first(), success);
            chunks.add(out -> sealed.write(out, open.high(), open.low(), unit.variant(), unit.first(), success));
            counts.add(unit.variant(), unit.first(), success, unit.segments());
            open.remove();
            return true;
        }
        int orphans = unit.removeOrphansBefore(windowStart + windowMillis, outcomes);
        if (orphans == 0) {
            return false;
        }
        openEvents -= orphans;
        if (unit.isEmpty()) {
            open.remove();
            return true;
        }
        put(open.high(), open.low(), unit, true);
        return false;
    }

    @Override
    public void takeChanged(OpenChunks chunks) {
        for (int i = 0; i < changed.size(); i++) {
            if (open.find(changed.high(i), changed.low(i)) && open.isMarked()) {
                open.unmark();
                OpenUnit unit = open.load();
                chunks.add(dueWindow(unit), changed.high(i), changed.low(i), unit::write);
            }
        }
        changed.clear();
    }

    @Override
    public void restoreOpen(ChunkReader in) {
        long high = in.readLong();
        long low = in.readLong();
        OpenUnit unit = restoring;
        unit.read(in);
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

    /** Clicks that became orphans leave an entry behind, which a log that is not compacted yet still holds. */
    @Override
    public void forgetDueBefore(long sealedUntilMillis) {
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

    @Override
    public void restoreSealed(ChunkReader in) {
        sealed.read(in);
        forgetOpen(sealed.high(), sealed.low());
    }

    @Override
    public long openEvents() {
        return openEvents;
    }

    @Override
    public int units() {
        return open.size() + sealed.size();
    }
}
