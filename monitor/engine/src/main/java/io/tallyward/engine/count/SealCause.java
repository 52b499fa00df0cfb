package io.tallyward.engine.count;

import java.util.Locale;

/** Why a window was sealed. Recorded, because only the first cause follows from the log alone. */
public enum SealCause {
    /** The partition's watermark passed the window's end, attribution and grace. */
    WATERMARK,
    /** The partition was idle; the wall clock, less the idle time, stood in for its watermark. */
    IDLE,
    /** The input came to its end (file replay only). */
    END;

    /** The published code, as in {@code watermark}. */
    public String code() {
        return name().toLowerCase(Locale.ROOT);
    }
}
