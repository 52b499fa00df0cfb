package io.tallyward.engine.count;

import java.util.Locale;

/** What became of an admitted event. Every event ends in exactly one outcome; the codes are published and stable. */
public enum Outcome {
    /** The exposure that stands as its unit's first. */
    TRIAL,
    /** The click that made a trial a success. */
    SUCCESS,
    /** A further exposure or click of a trial. */
    REPEAT,
    /** A click after the attribution time of its trial. */
    EXPIRED,
    /** An event of a unit under another variant than that of its first exposure. */
    CROSSOVER,
    /** A click that no exposure precedes within grace. */
    ORPHAN,
    /** An event that would still have changed a count, but its window was sealed. */
    LATE,
    /** An event outside the run of its experiment. */
    OUTSIDE,
    /** An event seen before; in counting by unit such an event is a {@link #REPEAT}. */
    DUPLICATE;

    /** The published code, as in {@code crossover}. */
    public String code() {
        return name().toLowerCase(Locale.ROOT);
    }
}
