package io.tallyward.engine.plan;

import java.time.Duration;

/**
 * How events become trials and successes.
 *
 * @param by what one trial is
 * @param attribution how long after its first exposure a click of the unit still counts; positive
 * @param grace how long after a window could last change it stays open for events that arrive out of order
 * @param window width of a counting window; divides a day
 */
public record CountRule(CountBy by, Duration attribution, Duration grace, Duration window) {

    /** What one trial is. */
    public enum CountBy {
        /** A unit that was exposed at least once; matches randomisation by unit. */
        UNIT,
        /** A view; the views of a unit are not independent, so variances go by the spread between units. */
        VIEW
    }

    /**
     * How long after the end of a window it is sealed: attribution plus grace. In counting by view, attribution is rounded up
     * to whole windows: a click belongs to the latest view before it, and a view that could take a click away from a window
     * that is being sealed must be late by then.
     */
    public long sealDelayMillis() {
        long wait = attribution.toMillis();
        if (by == CountBy.VIEW) {
            wait = Math.floorDiv(wait + window.toMillis() - 1, window.toMillis()) * window.toMillis();
        }
        return wait + grace.toMillis();
    }

    /**
     * How long after the end of its window a view may still arrive. In counting by unit that is until the window is sealed; in
     * counting by view it is the grace, so that nothing can move between views while clicks are still awaited.
     */
    public long viewPatienceMillis() {
        return by == CountBy.VIEW ? grace.toMillis() : sealDelayMillis();
    }
}
