package io.tallyward.engine.count;

import java.lang.invoke.MethodHandles;
import java.lang.invoke.VarHandle;
import java.nio.ByteOrder;

/**
 * Units whose views are counted, at rest: 44 bytes each, and 32 more for every view and click that may still change. A unit
 * is taken out into a working form, changed there and put back. Not thread-safe.
 */
final class ViewedUnits {

    /** Row beside the hash: first exposure with variant, latest trial with two marks, trials, successes, list of events. */
    private static final int FIRST = 0;

    private static final int LAST = FIRST + Long.BYTES;
    private static final int TRIALS = LAST + Long.BYTES;
    private static final int SUCCESSES = TRIALS + Integer.BYTES;
    private static final int EVENTS = SUCCESSES + Integer.BYTES;
    private static final int PAYLOAD = EVENTS + Integer.BYTES;

    private static final int VARIANT_BITS = 4;
    private static final int VARIANT_MASK = (1 << VARIANT_BITS) - 1;
    private static final long CHANGED = 1;

    /** Bits of an event in the pool, from the lowest: click, variant, copies, segments, and time since the start of the run. */
    private static final int COPY_BITS = 12;

    private static final int SEGMENT_BITS = 12;

    /** Copies of one view that are kept count of while it is open. */
    static final int MOST_COPIES = (1 << COPY_BITS) - 1;

    private static final int SEGMENT_SHIFT = COPY_BITS + VARIANT_BITS + 1;
    private static final int TIME_SHIFT = SEGMENT_SHIFT + SEGMENT_BITS;

    private static final VarHandle INTS = MethodHandles.byteArrayViewVarHandle(int[].class, ByteOrder.BIG_ENDIAN);
    private static final VarHandle LONGS = MethodHandles.byteArrayViewVarHandle(long[].class, ByteOrder.BIG_ENDIAN);

    private final long runFrom;
    private final HashedRows rows = new HashedRows(PAYLOAD);
    private final ViewPool pool = new ViewPool();
    private final ViewedUnit working = new ViewedUnit();

    ViewedUnits(long runFrom) {
        this.runFrom = runFrom;
    }

    int size() {
        return rows.size();
    }

    /** Looks a unit up. */
    boolean find(long high, long low) {
        return rows.find(high, low);
    }

    /** The first unit whose hash begins with 32 given bits. */
    boolean findFirst(int prefix) {
        return rows.findFirst(prefix);
    }

    /** The next unit whose hash begins with them. */
    boolean next(int prefix) {
        return rows.next(prefix);
    }

    /** Whether, after a removal, the unit in its place has a hash that begins with them. */
    boolean holds(int prefix) {
        return rows.holds(prefix);
    }

    long high() {
        return rows.high();
    }

    long low() {
        return rows.low();
    }

    /** A unit of which nothing is known yet, to work on. */
    ViewedUnit fresh() {
        working.clear();
        return working;
    }

    /** The unit last found, to work on. It is valid until the next one is taken out. */
    ViewedUnit load() {
        byte[] bytes = rows.bytes();
        int at = rows.payload();
        long firstState = (long) LONGS.get(bytes, at + FIRST);
        working.clear();
        working.settled(
                (int) firstState & VARIANT_MASK,
                runFrom + (firstState >>> VARIANT_BITS),
                (int) INTS.get(bytes, at + TRIALS),
                (int) INTS.get(bytes, at + SUCCESSES),
                runFrom + ((long) LONGS.get(bytes, at + LAST) >>> 1));
        for (int list = list(bytes, at); list != ViewPool.NONE; list = pool.next(list)) {
            long state = pool.state(list);
            working.add(
                    (state & 1) != 0,
                    (int) (state >>> 1) & VARIANT_MASK,
                    runFrom + (state >>> TIME_SHIFT),
                    pool.key(list),
                    pool.name(list),
                    pool.tie(list),
                    (int) (state >>> VARIANT_BITS + 1) & MOST_COPIES,
                    (int) (state >>> SEGMENT_SHIFT) & SegmentTable.MOST_TUPLES);
        }
        return working;
    }

    /**
     * Puts a unit back, and marks it changed.
     *
     * @param known whether the place last looked for holds it
     * @return whether it was not marked before
     */
    boolean store(long high, long low, ViewedUnit unit, boolean known) {
        if (!known) {
            rows.insert(high, low);
        }
        byte[] bytes = rows.bytes();
        int at = rows.payload();
        boolean marked = known && isMarked();
        int list = ViewPool.NONE;
        pool.release(known ? list(bytes, at) : ViewPool.NONE);
        for (int i = unit.size() - 1; i >= 0; i--) {
            list = pool.prepend(list, state(unit, i), unit.key(i), unit.name(i), unit.tie(i));
        }
        boolean fixed = unit.isFixed();
        LONGS.set(bytes, at + FIRST, fixed ? unit.first() - runFrom << VARIANT_BITS | unit.variant() : 0);
        LONGS.set(bytes, at + LAST, (fixed ? unit.lastTrial() - runFrom << 1 : 0) | CHANGED);
        INTS.set(bytes, at + TRIALS, unit.trials());
        INTS.set(bytes, at + SUCCESSES, unit.successes());
        INTS.set(bytes, at + EVENTS, list + 1);
        return !marked;
    }

    private long state(ViewedUnit unit, int event) {
        return unit.time(event) - runFrom << TIME_SHIFT
                | (long) unit.segments(event) << SEGMENT_SHIFT
                | (long) unit.copies(event) << VARIANT_BITS + 1
                | (long) unit.variant(event) << 1
                | (unit.isClick(event) ? 1 : 0);
    }

    /** Removes the unit last found. */
    void remove() {
        pool.release(list(rows.bytes(), rows.payload()));
        rows.remove();
    }

    /** Whether the unit last found is marked changed. */
    boolean isMarked() {
        return ((long) LONGS.get(rows.bytes(), rows.payload() + LAST) & CHANGED) != 0;
    }

    void unmark() {
        int at = rows.payload() + LAST;
        LONGS.set(rows.bytes(), at, (long) LONGS.get(rows.bytes(), at) & ~CHANGED);
    }

    private static int list(byte[] bytes, int at) {
        return (int) INTS.get(bytes, at + EVENTS) - 1;
    }
}
