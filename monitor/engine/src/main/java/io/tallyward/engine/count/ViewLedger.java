package io.tallyward.engine.count;

import io.tallyward.engine.event.EventKind;
import io.tallyward.engine.event.EventSlot;
import io.tallyward.engine.plan.Plan;
import java.util.List;
import java.util.Optional;
import java.util.Set;
import java.util.TreeMap;
import java.util.TreeSet;

/**
 * The units of an experiment that counts by view. Every distinct view under the variant of its unit is a trial, told in its
 * own window; {@link ViewSealing} has the rules by which clicks find their views. Of a unit whose windows are sealed its first
 * exposure and two sums are remembered, of its views nothing: a copy of a view that comes after the view was sealed is late.
 */
final class ViewLedger implements CountLedger {

    private final long attributionMillis;
    private final WindowGrid windows;
    private final ViewSealing sealing;
    private final Optional<SegmentTable> segments;
    private final UnitHasher hasher;
    private final ViewedUnits units;
    private final ViewedUnit restoring = new ViewedUnit();
    private final TreeMap<Long, PrefixList> due = new TreeMap<>();
    private final HashList changed = new HashList();
    private long openEvents;

    /**
     * A ledger of no unit yet.
     *
     * @param segments where the segments of views are, if the plan names any
     * @param hasher hashes what views are called, for this ledger alone
     */
    ViewLedger(Plan plan, Optional<SegmentTable> segments, UnitHasher hasher) {
        this.segments = segments;
        attributionMillis = plan.count().attribution().toMillis();
        windows = new WindowGrid(plan.count().window().toMillis());
        sealing = new ViewSealing(plan.count());
        units = new ViewedUnits(plan.run().from().toEpochMilli());
        this.hasher = hasher;
    }

    @Override
    public Outcome accept(long high, long low, EventSlot event, long arrivalMillis, boolean late) {
        boolean known = units.find(high, low);
        boolean view = event.kind() == EventKind.VIEW;
        if (!known && late) {
            return view ? Outcome.LATE : Outcome.ORPHAN;
        }
        ViewedUnit unit = known ? units.load() : units.fresh();
        Outcome outcome = view ? see(unit, high, event, late) : click(unit, high, event, arrivalMillis, late);
        if (outcome == null) {
            openEvents++;
            put(high, low, unit, known);
        }
        return outcome;
    }

    private Outcome see(ViewedUnit unit, long high, EventSlot event, boolean late) {
        long name = hash(event.id(), event.idLength());
        long key = name;
        if (event.sourceLength() > 0) {
            key ^= Long.rotateLeft(hash(event.source(), event.sourceLength()), 1);
        }
        int copy = unit.view(key);
        if (copy >= 0 && unit.copies(copy) == ViewedUnits.MOST_COPIES) {
            return Outcome.DUPLICATE;
        }
        if (copy >= 0) {
            if (late) {
                unit.viewAgain(copy, unit.variant(copy), unit.time(copy), unit.segments(copy));
            } else {
                if (event.atMillis() < unit.time(copy)) {
                    dueAt(unit, event.atMillis(), high);
                }
                unit.viewAgain(copy, event.variant(), event.atMillis(), segments(event));
            }
            return null;
        }
        if (late) {
            boolean crossover = unit.isFixed() && event.atMillis() >= unit.first() && event.variant() != unit.variant();
            return crossover ? Outcome.CROSSOVER : Outcome.LATE;
        }
        if (unit.isFull()) {
            return Outcome.REPEAT;
        }
        dueAt(unit, event.atMillis(), high);
        unit.add(false, event.variant(), event.atMillis(), key, name, event.tie(), 1, segments(event));
        return null;
    }

    private int segments(EventSlot event) {
        return segments.isPresent() ? segments.get().code(event) : 0;
    }

    private Outcome click(ViewedUnit unit, long high, EventSlot event, long arrivalMillis, boolean late) {
        if (late) {
            return clickAfterwards(unit, event);
        }
        if (unit.isFull()) {
            return Outcome.REPEAT;
        }
        dueAt(unit, event.atMillis(), high);
        long name = event.viewIdLength() > 0 ? hash(event.viewId(), event.viewIdLength()) : ViewedUnit.UNNAMED;
        unit.add(true, event.variant(), event.atMillis(), arrivalMillis, name, 0, 1, 0);
        return null;
    }

    /** What became of a click that came when nothing could count it any more. */
    private Outcome clickAfterwards(ViewedUnit unit, EventSlot event) {
        int earliest = unit.earliestView();
        if (!unit.isFixed() && earliest < 0) {
            return Outcome.ORPHAN;
        }
        long first = unit.isFixed() ? unit.first() : unit.time(earliest);
        int variant = unit.isFixed() ? unit.variant() : unit.variant(earliest);
        if (event.atMillis() < first) {
            return Outcome.ORPHAN;
        }
        if (event.variant() != variant) {
            return Outcome.CROSSOVER;
        }
        long latest = unit.isFixed() ? unit.lastTrial() : first;
        for (int i = 0; i < unit.size(); i++) {
            if (!unit.isClick(i) && unit.variant(i) == variant) {
                latest = Math.max(latest, unit.time(i));
            }
        }
        return event.atMillis() > latest + attributionMillis ? Outcome.EXPIRED : Outcome.LATE;
    }

    /** Never {@link ViewedUnit#UNNAMED}. */
    private long hash(byte[] text, int length) {
        hasher.hash(text, 0, length);
        return hasher.high() == ViewedUnit.UNNAMED ? 1 : hasher.high();
    }

    private void put(long high, long low, ViewedUnit unit, boolean known) {
        if (units.store(high, low, unit, known)) {
            changed.add(high, low);
        }
    }

    /** Notes that an event of a unit falls due with a window, unless another of its events does. */
    private void dueAt(ViewedUnit unit, long atMillis, long high) {
        long window = windowOf(atMillis);
        for (int i = 0; i < unit.size(); i++) {
            if (windowOf(unit.time(i)) == window) {
                return;
            }
        }
        due.computeIfAbsent(window, start -> new PrefixList()).add(high);
    }

    private long windowOf(long atMillis) {
        return windows.of(atMillis);
    }

    @Override
    public long firstDue() {
        return due.isEmpty() ? Long.MAX_VALUE : due.firstKey();
    }

    @Override
    public List<byte[]> seal(long windowStart, OutcomeCounts.Builder outcomes, WindowCounts counts) {
        SealedChunks chunks = new SealedChunks();
        PrefixList prefixes = due.remove(windowStart);
        for (int i = 0; prefixes != null && i < prefixes.size(); i++) {
            int prefix = prefixes.get(i);
            boolean more = units.findFirst(prefix);
            while (more) {
                boolean removed = sealFound(windowStart, outcomes, counts, chunks);
                more = removed ? units.holds(prefix) : units.next(prefix);
            }
        }
        return chunks.take();
    }

    /** Seals what falls due of the unit last found; returns whether nothing is left of the unit. */
    private boolean sealFound(
            long windowStart, OutcomeCounts.Builder outcomes, WindowCounts counts, SealedChunks chunks) {
        ViewedUnit unit = units.load();
        int before = unit.events();
        int trials = unit.trials();
        int successes = unit.successes();
        if (!sealing.seal(unit, windowStart, outcomes)) {
            return false;
        }
        openEvents -= before - unit.events();
        if (trials == 0 && unit.isFixed()) {
            counts.begin(unit.variant(), unit.first(), sealing.segments());
        }
        if (unit.trials() > trials) {
            counts.add(
                    unit.variant(),
                    unit.first(),
                    trials,
                    successes,
                    unit.trials() - trials,
                    unit.successes() - successes);
        }
        long high = units.high();
        long low = units.low();
        chunks.add(out -> {
            out.writeLong(high);
            out.writeLong(low);
            unit.writeSettled(out);
        });
        if (unit.isEmpty()) {
            units.remove();
            return true;
        }
        put(high, low, unit, true);
        return false;
    }

    @Override
    public void takeChanged(OpenChunks chunks) {
        for (int i = 0; i < changed.size(); i++) {
            if (units.find(changed.high(i), changed.low(i)) && units.isMarked()) {
                units.unmark();
                ViewedUnit unit = units.load();
                if (unit.size() > 0) {
                    chunks.add(dueWindow(unit), changed.high(i), changed.low(i), unit::write);
                }
            }
        }
        changed.clear();
    }

    /** The window with which the last of what is open about a unit is sealed. */
    private long dueWindow(ViewedUnit unit) {
        long latest = Long.MIN_VALUE;
        for (int i = 0; i < unit.size(); i++) {
            latest = Math.max(latest, unit.time(i));
        }
        return windowOf(latest);
    }

    @Override
    public void restoreOpen(ChunkReader in) {
        long high = in.readLong();
        long low = in.readLong();
        restoring.read(in);
        Set<Long> falling = new TreeSet<>();
        for (int i = 0; i < restoring.size(); i++) {
            falling.add(windowOf(restoring.time(i)));
        }
        if (units.find(high, low)) {
            ViewedUnit known = units.load();
            for (int i = 0; i < known.size(); i++) {
                falling.remove(windowOf(known.time(i)));
            }
        }
        falling.forEach(
                window -> due.computeIfAbsent(window, start -> new PrefixList()).add(high));
        replace(high, low);
    }

    /** What was open about the unit is not, unless it is restored after this. */
    @Override
    public void restoreSealed(ChunkReader in) {
        long high = in.readLong();
        long low = in.readLong();
        restoring.readSettled(in);
        replace(high, low);
    }

    private void replace(long high, long low) {
        boolean known = units.find(high, low);
        openEvents += restoring.events() - (known ? units.load().events() : 0);
        if (!restoring.isEmpty()) {
            units.store(high, low, restoring, known);
            units.unmark();
        } else if (known) {
            units.remove();
        }
    }

    /** Every unit of a sealed window was packed with it; what remains are reminders. */
    @Override
    public void forgetDueBefore(long sealedUntilMillis) {
        due.headMap(sealedUntilMillis).clear();
    }

    @Override
    public long openEvents() {
        return openEvents;
    }

    @Override
    public int units() {
        return units.size();
    }
}
