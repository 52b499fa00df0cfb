package io.tallyward.engine.event;

/** The two kinds of event that are counted. */
public enum EventKind {
    /** The unit was shown the variant: an exposure. */
    VIEW,
    /** The unit responded to what it was shown. */
    CLICK
}
