package io.tallyward.service.rehearse;

import io.tallyward.engine.record.Verdict;

/** How the comparison of a challenger with the control ended in one run. */
public enum Ending {
    /** The verdict was told: better than the control. */
    BENEFIT,
    /** The verdict was told: worse than the control. */
    HARM,
    /** The verdict was told: a benefit has become unlikely. */
    FUTILITY,
    /** The planned information or time was used up and no boundary was crossed. */
    EXHAUSTED,
    /** The run ended while its data were not trusted, so that no verdict was told. */
    WITHHELD;

    /** The ending that a told verdict makes. */
    static Ending of(Verdict verdict) {
        return switch (verdict) {
            case STOP_BENEFIT -> BENEFIT;
            case STOP_HARM -> HARM;
            case STOP_FUTILITY -> FUTILITY;
            case EXHAUSTED -> EXHAUSTED;
            case WAITING, CONTINUE, STOPPED ->
                throw new IllegalArgumentException("verdict: " + verdict.code() + " (expected: a settled one)");
        };
    }
}
