package io.tallyward.engine.count;

import java.lang.invoke.MethodHandles;
import java.lang.invoke.VarHandle;
import java.nio.ByteOrder;
import java.util.HashMap;
import java.util.Map;

/**
 * Units whose trial can still change, at rest. Nearly all of them are a standing exposure and a click or two: 30 bytes and 20
 * per click. One that has more to it, a crossover with many clicks or a bot, is kept as it is.
 *
 * <p>A unit is taken out into a working form, changed there and put back. Not thread-safe.
 */
final class OpenUnits {

    /** Row beside the hash: six bytes of state, four of digest, four for its list of events, two of segments if need be. */
    private static final int STATE = 6;

    private static final int TIE = STATE;
    private static final int EVENTS = TIE + Integer.BYTES;
    private static final int SEGMENTS = EVENTS + Integer.BYTES;

    /** State: 35 bits of first exposure, 4 of variant plus one, 7 of exposures, and two marks. */
    private static final int EXPOSURE_BITS = 7;

    private static final int MOST_EXPOSURES = (1 << EXPOSURE_BITS) - 1;
    private static final int VARIANT_BITS = 4;
    private static final long RICH = 2;
    private static final long CHANGED = 1;

    /** Events of a unit in the pool; a unit with more is kept as it is. */
    private static final int MOST_EVENTS = 8;

    /** Kinds of event in the pool. */
    private static final int CLICK = 0;

    private static final int TOO_LATE = 1;
    private static final int EXPOSURE = 2;

    private static final VarHandle INTS = MethodHandles.byteArrayViewVarHandle(int[].class, ByteOrder.BIG_ENDIAN);
    private static final VarHandle SHORTS = MethodHandles.byteArrayViewVarHandle(short[].class, ByteOrder.BIG_ENDIAN);

    private final long runFrom;
    private final int variants;
    private final boolean bySegment;
    private final HashedRows rows;
    private final EventPool events = new EventPool();
    private final Map<UnitHash, OpenUnit> rich = new HashMap<>();
    private final OpenUnit working;

    OpenUnits(long runFrom, int variants, boolean bySegment) {
        this.runFrom = runFrom;
        this.variants = variants;
        this.bySegment = bySegment;
        rows = new HashedRows(bySegment ? SEGMENTS + Short.BYTES : SEGMENTS);
        working = new OpenUnit(variants);
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
    OpenUnit fresh() {
        working.clear();
        return working;
    }

    /** The unit last found, to work on. It is valid until the next one is taken out. */
    OpenUnit load() {
        byte[] bytes = rows.bytes();
        int at = rows.payload();
        long state = state(bytes, at);
        if ((state & RICH) != 0) {
            return rich.get(new UnitHash(rows.high(), rows.low()));
        }
        working.clear();
        int variant = (int) (state >>> (EXPOSURE_BITS + 2) & (1 << VARIANT_BITS) - 1) - 1;
        if (variant >= 0) {
            working.restoreTrial(
                    variant,
                    runFrom + (state >>> (VARIANT_BITS + EXPOSURE_BITS + 2)),
                    (int) INTS.get(bytes, at + TIE),
                    (int) (state >>> 2) & MOST_EXPOSURES);
        }
        if (bySegment) {
            working.segments((short) SHORTS.get(bytes, at + SEGMENTS));
        }
        for (int list = list(bytes, at); list != EventPool.NONE; list = events.next(list)) {
            restore(events.first(list), events.second(list));
        }
        return working;
    }

    /**
     * Whether an exposure of the unit last found only adds to the number of exposures that its row holds: to the variant
     * that stands, after the exposure that stands.
     */
    boolean isFurtherView(int variant, long atMillis) {
        long state = state(rows.bytes(), rows.payload());
        return (state & RICH) == 0
                && (state >>> (EXPOSURE_BITS + 2) & (1 << VARIANT_BITS) - 1) == variant + 1
                && atMillis - runFrom > state >>> (VARIANT_BITS + EXPOSURE_BITS + 2)
                && (state >>> 2 & MOST_EXPOSURES) < MOST_EXPOSURES;
    }

    /** Adds it in place and marks the unit as changed; returns whether it was not marked before. */
    boolean addFurtherView() {
        byte[] bytes = rows.bytes();
        int at = rows.payload();
        long state = state(bytes, at);
        putState(bytes, at, state + (1 << 2) | CHANGED);
        return (state & CHANGED) == 0;
    }

    private void restore(long packed, long arrival) {
        int variant = (int) (packed >>> 2) & (1 << VARIANT_BITS) - 1;
        switch ((int) packed & 3) {
            case CLICK -> working.restoreClick(variant, runFrom + (packed >>> (VARIANT_BITS + 2)), arrival);
            case TOO_LATE -> working.restoreTooLate(variant);
            default -> working.restoreExposure(variant);
        }
    }

    /**
     * Puts a unit back and marks it as changed. The unit must be the one last looked for.
     *
     * @param known whether it was found
     * @return whether it was not marked as changed before
     */
    boolean store(long high, long low, OpenUnit unit, boolean known) {
        long before = 0;
        if (known) {
            before = state(rows.bytes(), rows.payload());
            events.release(list(rows.bytes(), rows.payload()));
        } else {
            rows.insert(high, low);
        }
        long state = CHANGED;
        int list = EventPool.NONE;
        if (isRich(unit)) {
            state |= RICH;
            rich.compute(new UnitHash(high, low), (hash, held) -> held == unit ? held : unit.copy());
        } else {
            if ((before & RICH) != 0) {
                rich.remove(new UnitHash(high, low));
            }
            state |= stateOf(unit);
            list = pool(unit);
        }
        put(state, unit.firstTie(), list);
        if (bySegment) {
            SHORTS.set(rows.bytes(), rows.payload() + SEGMENTS, (short) unit.segments());
        }
        return (before & CHANGED) == 0;
    }

    private long stateOf(OpenUnit unit) {
        return unit.hasTrial()
                ? (unit.first() - runFrom) << (VARIANT_BITS + EXPOSURE_BITS + 2)
                        | (unit.variant() + 1L) << (EXPOSURE_BITS + 2)
                        | (long) unit.exposures(unit.variant()) << 2
                : 0;
    }

    private boolean isRich(OpenUnit unit) {
        int pooled = unit.clicks();
        for (int variant = 0; variant < variants && pooled <= MOST_EVENTS; variant++) {
            pooled += unit.tooLate(variant) + (variant == unit.variant() ? 0 : unit.exposures(variant));
        }
        return pooled > MOST_EVENTS
                || unit.hasSurplus()
                || (unit.hasTrial() && unit.exposures(unit.variant()) > MOST_EXPOSURES);
    }

    /** Lists are built from the end, so that clicks come back in the order in which they arrived. */
    private int pool(OpenUnit unit) {
        int list = EventPool.NONE;
        for (int variant = variants - 1; variant >= 0; variant--) {
            for (int i = unit.tooLate(variant); i > 0; i--) {
                list = events.prepend(list, packed(0, variant, TOO_LATE), 0);
            }
            for (int i = variant == unit.variant() ? 0 : unit.exposures(variant); i > 0; i--) {
                list = events.prepend(list, packed(0, variant, EXPOSURE), 0);
            }
        }
        for (int click = unit.clicks() - 1; click >= 0; click--) {
            list = events.prepend(
                    list,
                    packed(unit.clickTime(click) - runFrom, unit.clickVariant(click), CLICK),
                    unit.clickArrival(click));
        }
        return list;
    }

    private static long packed(long sinceFrom, int variant, int kind) {
        return sinceFrom << (VARIANT_BITS + 2) | (long) variant << 2 | kind;
    }

    private void put(long state, int tie, int list) {
        byte[] bytes = rows.bytes();
        int at = rows.payload();
        putState(bytes, at, state);
        INTS.set(bytes, at + TIE, tie);
        INTS.set(bytes, at + EVENTS, list + 1);
    }

    private static void putState(byte[] bytes, int at, long state) {
        INTS.set(bytes, at, (int) (state >>> Short.SIZE));
        SHORTS.set(bytes, at + Integer.BYTES, (short) state);
    }

    /** Takes the mark of change from the unit last found. */
    void unmark() {
        byte[] bytes = rows.bytes();
        int last = rows.payload() + STATE - 1;
        bytes[last] = (byte) (bytes[last] & ~CHANGED);
    }

    /** Whether the unit last found is marked as changed. */
    boolean isMarked() {
        return (state(rows.bytes(), rows.payload()) & CHANGED) != 0;
    }

    /** Removes the unit last found. */
    void remove() {
        if ((state(rows.bytes(), rows.payload()) & RICH) != 0) {
            rich.remove(new UnitHash(rows.high(), rows.low()));
        }
        events.release(list(rows.bytes(), rows.payload()));
        rows.remove();
    }

    private static long state(byte[] bytes, int at) {
        return ((int) INTS.get(bytes, at) & 0xffffffffL) << Short.SIZE
                | (short) SHORTS.get(bytes, at + Integer.BYTES) & 0xffffL;
    }

    private static int list(byte[] bytes, int at) {
        return (int) INTS.get(bytes, at + EVENTS) - 1;
    }
}
