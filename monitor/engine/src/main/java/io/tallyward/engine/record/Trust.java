package io.tallyward.engine.record;

import java.util.Locale;

/** Whether an experiment's data can be believed, worst first. The codes are published and stable. */
public enum Trust {
    /** The observed split contradicts the planned one (sample-ratio mismatch). */
    MISMATCH,
    /** Too many events of units under a variant other than their first. */
    CROSSOVER,
    /** Clicks without a view before them are more frequent under one variant: views of it are lost. */
    ORPHANS,
    /** A variant, or the whole stream, has fallen silent. */
    STARVED,
    /** Too many events arrive after their window was sealed. */
    LATE,
    /** Nothing speaks against the data. */
    SOUND;

    /** The published code, as in {@code sound}. */
    public String code() {
        return name().toLowerCase(Locale.ROOT);
    }
}
