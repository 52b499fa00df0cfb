package io.tallyward.engine.count;

import io.tallyward.engine.plan.CountRule;
import java.util.Arrays;

/**
 * What becomes of the views and clicks of one unit when a window is sealed, in counting by view.
 *
 * <p>A view under the variant of its unit is a trial; under another it is a crossover. A click that names a view belongs to
 * it; one that names none belongs to the latest trial at or before it. It is in time up to the attribution after that view. The
 * first click in time makes a success, further ones are repeats. Clicks in time are told with the window of their view; all
 * others wait for the sealing of their own window, by when every view that could still claim them has come or is late.
 *
 * <p>Of views in windows sealed before nothing is remembered but the latest. So a click that names a view and finds it not is
 * an orphan while no view of the unit can have expired, and expired from then on.
 */
final class ViewSealing {

    private static final int NONE = -1;

    private final long attributionMillis;
    private final long graceMillis;
    private final long windowMillis;
    private final long sealDelayMillis;

    private long windowStart;
    private int segments;
    private boolean[] done = new boolean[8];
    private boolean[] succeeded = new boolean[8];

    ViewSealing(CountRule rule) {
        attributionMillis = rule.attribution().toMillis();
        graceMillis = rule.grace().toMillis();
        windowMillis = rule.window().toMillis();
        sealDelayMillis = rule.sealDelayMillis();
    }

    /**
     * Seals.
     *
     * @param outcomes receives what became of the events that are removed from the unit
     * @return whether any were
     */
    boolean seal(ViewedUnit unit, long windowStartMillis, OutcomeCounts.Builder outcomes) {
        windowStart = windowStartMillis;
        prepare(unit.size());
        int standing = unit.isFixed() ? NONE : unit.earliestView();
        boolean begins = standing != NONE && inWindow(unit.time(standing));
        if (begins) {
            unit.fix(standing);
            segments = unit.segments(standing);
        }
        boolean begun = begins || unit.isFixed();
        for (int i = 0; i < unit.size(); i++) {
            if (unit.isClick(i)) {
                sealClick(unit, i, begun, outcomes);
            }
        }
        sealViews(unit, outcomes);
        boolean any = false;
        for (int i = 0; i < unit.size(); i++) {
            any |= done[i];
        }
        unit.removeMarked(done);
        return any;
    }

    /** Code of the segments of the first exposure that was last fixed. */
    int segments() {
        return segments;
    }

    private void prepare(int size) {
        if (done.length < size) {
            done = new boolean[2 * size];
            succeeded = new boolean[2 * size];
        }
        Arrays.fill(done, 0, size, false);
        Arrays.fill(succeeded, 0, size, false);
    }

    private boolean inWindow(long atMillis) {
        return atMillis >= windowStart && atMillis < windowStart + windowMillis;
    }

    private void sealClick(ViewedUnit unit, int click, boolean begun, OutcomeCounts.Builder outcomes) {
        long at = unit.time(click);
        boolean own = inWindow(at);
        if (!begun || at < unit.first()) {
            tell(click, unit, own, Outcome.ORPHAN, outcomes);
        } else if (unit.variant(click) != unit.variant()) {
            tell(click, unit, own, Outcome.CROSSOVER, outcomes);
        } else {
            int view = viewOf(unit, click);
            boolean inTime = view != NONE && at <= unit.time(view) + attributionMillis;
            if (inTime && inWindow(unit.time(view))) {
                tell(click, unit, true, success(unit, click, view), outcomes);
            } else {
                tell(click, unit, own, without(unit, click), outcomes);
            }
        }
    }

    private void tell(int click, ViewedUnit unit, boolean now, Outcome outcome, OutcomeCounts.Builder outcomes) {
        if (now) {
            outcomes.addOf(unit.variant(click), outcome);
            done[click] = true;
        }
    }

    /** The view a click belongs to, among those kept: the one it names, or else the latest trial; none comes after it. */
    private static int viewOf(ViewedUnit unit, int click) {
        boolean named = unit.name(click) != ViewedUnit.UNNAMED;
        int found = NONE;
        for (int i = 0; i < unit.size(); i++) {
            boolean candidate = !unit.isClick(i)
                    && unit.variant(i) == unit.variant()
                    && unit.time(i) <= unit.time(click)
                    && (!named || unit.name(i) == unit.name(click));
            if (candidate && (found == NONE || unit.isEarlier(i, found) == named)) {
                found = i;
            }
        }
        return found;
    }

    /** A click counts only if its source had not passed the sealing of the window when it arrived. */
    private Outcome success(ViewedUnit unit, int click, int view) {
        if (unit.key(click) >= windowStart + windowMillis + sealDelayMillis) {
            return Outcome.LATE;
        }
        if (succeeded[view]) {
            return Outcome.REPEAT;
        }
        succeeded[view] = true;
        return Outcome.SUCCESS;
    }

    /** What becomes of a click that no view kept here claims. */
    private Outcome without(ViewedUnit unit, int click) {
        long at = unit.time(click);
        if (at > latestTrial(unit, at) + attributionMillis) {
            return Outcome.EXPIRED;
        }
        boolean delayed = unit.key(click) >= windowStart + windowMillis + graceMillis;
        if (delayed) {
            return Outcome.LATE;
        }
        return unit.first() > at - attributionMillis ? Outcome.ORPHAN : Outcome.EXPIRED;
    }

    /** Event time of the latest trial at or before a moment, kept or sealed. */
    private static long latestTrial(ViewedUnit unit, long atMillis) {
        long latest = unit.lastTrial();
        for (int i = 0; i < unit.size(); i++) {
            if (!unit.isClick(i) && unit.variant(i) == unit.variant() && unit.time(i) <= atMillis) {
                latest = Math.max(latest, unit.time(i));
            }
        }
        return latest;
    }

    private void sealViews(ViewedUnit unit, OutcomeCounts.Builder outcomes) {
        int trials = 0;
        int successes = 0;
        long last = Long.MIN_VALUE;
        for (int i = 0; i < unit.size(); i++) {
            if (unit.isClick(i) || !inWindow(unit.time(i))) {
                continue;
            }
            done[i] = true;
            outcomes.add(Outcome.DUPLICATE, unit.copies(i) - 1L);
            if (unit.variant(i) == unit.variant()) {
                outcomes.add(Outcome.TRIAL, 1);
                trials++;
                successes += succeeded[i] ? 1 : 0;
                last = Math.max(last, unit.time(i));
            } else {
                outcomes.add(Outcome.CROSSOVER, 1);
            }
        }
        unit.settle(trials, successes, last);
    }
}
