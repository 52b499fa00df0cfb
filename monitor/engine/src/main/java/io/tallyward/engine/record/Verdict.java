package io.tallyward.engine.record;

import java.util.Locale;

/**
 * What an experiment's numbers say. The codes are published and stable.
 *
 * <p>A verdict on a variant begins as {@link #WAITING}, becomes {@link #CONTINUE} with the first look that decides nothing,
 * and from either of these one of the others, which stand for good: later data change the shown estimates, and a loss of trust
 * is told beside the verdict, but never the verdict. A final verdict that is reached while the data are not trusted is held,
 * and becomes the verdict when trust returns; until then it is none.
 */
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

    /** Whether this verdict may become another one, or stay. */
    public boolean mayBecome(Verdict next) {
        return next == this || (!settled && next != WAITING);
    }

    /**
     * The next verdict.
     *
     * @throws IllegalStateException if this one may not become it
     */
    public Verdict become(Verdict next) {
        if (!mayBecome(next)) {
            throw new IllegalStateException("verdict " + code() + ": " + next.code() + " (expected: "
                    + (settled ? "nothing else, as it is final" : "no way back") + ")");
        }
        return next;
    }

    /** The published code, as in {@code stop-benefit}. */
    public String code() {
        return name().toLowerCase(Locale.ROOT).replace('_', '-');
    }
}
