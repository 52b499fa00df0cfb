package io.tallyward.service.config;

import java.time.Instant;

/** Where to begin in partitions without a committed offset. */
public sealed interface InputStart {

    /** With the oldest record that the topic still holds. */
    record Earliest() implements InputStart {}

    /** With the records that arrive from now on. */
    record Latest() implements InputStart {}

    /** With the first record whose timestamp is at or after a moment. */
    record At(Instant time) implements InputStart {}
}
