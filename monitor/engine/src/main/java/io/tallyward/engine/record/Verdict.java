package io.tallyward.engine.record;

import java.util.Locale;

/** What an experiment's numbers say. The codes are published and stable. */
public enum Verdict {
    /** No look has been taken yet. */
    WAITING(false),
    /** Looks were taken, no boundary was crossed: go on. */
    CONTINUE(false),
    /** The benefit boundary was crossed while the data were trusted; final. */
    STOP_BENEFIT(true),
    /** The harm boundary was crossed while the data were trusted; final. */
    STOP_HARM(true),
    /** The futility boundary was crossed; advice, not an obligation; final. */
    STOP_FUTILITY(true),
    /** The planned information or time is used up without a crossing; final. */
    EXHAUSTED(true),
    /** The owner ended the experiment before a boundary was crossed; final. */
    STOPPED(true);

    private final boolean settled;

    Verdict(boolean settled) {
        this.settled = settled;
    }

    /** Whether the verdict is final: later data change the shown estimates, never the verdict. */
    public boolean settled() {
        return settled;
    }

    /** The published code, as in {@code stop-benefit}. */
    public String code() {
        return name().toLowerCase(Locale.ROOT).replace('_', '-');
    }
}
