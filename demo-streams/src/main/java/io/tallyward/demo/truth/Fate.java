package io.tallyward.demo.truth;

import java.util.Locale;

/** What becomes of an event that is not rejected; the codes are the published ones. */
public enum Fate {
    TRIAL,
    SUCCESS,
    REPEAT,
    EXPIRED,
    CROSSOVER,
    ORPHAN,
    LATE,
    OUTSIDE,
    DUPLICATE;

    /** The published code, as in {@code crossover}. */
    public String code() {
        return name().toLowerCase(Locale.ROOT);
    }
}
