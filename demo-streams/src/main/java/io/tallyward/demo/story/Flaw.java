package io.tallyward.demo.story;

/** What is wrong with a record, so that a monitor must reject it, and under which published reason. */
public enum Flaw {
    /** Nothing. */
    NONE(""),
    /** The text breaks off. */
    CUT_OFF("unparsable"),
    /** The record names no unit. */
    NO_UNIT("missing-field"),
    /** No plan has this experiment. */
    STRANGE_EXPERIMENT("unknown-experiment"),
    /** The plan has no such variant. */
    STRANGE_VARIANT("unknown-variant"),
    /** The emitter's clock runs far ahead. */
    CLOCK_AHEAD("bad-time"),
    /** The time is no time. */
    UNREADABLE_TIME("bad-time"),
    /** The record is larger than a monitor has to accept (64 KiB). */
    TOO_LARGE("oversized");

    private final String reason;

    Flaw(String reason) {
        this.reason = reason;
    }

    /** The published code of the rejection; empty for {@link #NONE}. */
    public String reason() {
        return reason;
    }
}
