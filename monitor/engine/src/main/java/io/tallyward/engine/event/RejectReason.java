package io.tallyward.engine.event;

import java.util.Locale;

/** Why a record of an input topic was not admitted as an event. The codes are published and stable. */
public enum RejectReason {
    /** The bytes are not of the declared format. */
    UNPARSABLE,
    /** A field that every event needs is absent, empty or of the wrong type. */
    MISSING_FIELD,
    /** No plan names the event's experiment. */
    UNKNOWN_EXPERIMENT,
    /** The experiment's plan has no such variant. */
    UNKNOWN_VARIANT,
    /** The event time cannot be read, or lies ahead of the record's timestamp by more than the allowed skew. */
    BAD_TIME,
    /** The record, or one of its fields, is larger than allowed. */
    OVERSIZED;

    /** The published code: lower case with hyphens, as in {@code missing-field}. */
    public String code() {
        return name().toLowerCase(Locale.ROOT).replace('_', '-');
    }
}
