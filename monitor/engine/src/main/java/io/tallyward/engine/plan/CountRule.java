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

    /** How long after the end of a window it is sealed: attribution plus grace. */
    public long sealDelayMillis() {
        return attribution.toMillis() + grace.toMillis();
    }
}
