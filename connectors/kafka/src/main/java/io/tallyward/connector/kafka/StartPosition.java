package io.tallyward.connector.kafka;

import java.time.Instant;
import java.util.Objects;

/** Where reading begins in a partition for which the group has committed nothing yet. */
public sealed interface StartPosition {

    /** At the oldest record kept. */
    record Earliest() implements StartPosition {
        @Override
        public String toString() {
            return "the oldest record";
        }
    }

    /** After the newest record there is when the partition is first assigned. */
    record Latest() implements StartPosition {
        @Override
        public String toString() {
            return "the next new record";
        }
    }

    /**
     * At the first record whose Kafka timestamp is not before an instant; after the newest if there is none.
     *
     * @param instant with millisecond resolution
     */
    record At(Instant instant) implements StartPosition {
        public At {
            Objects.requireNonNull(instant, "instant");
        }

        @Override
        public String toString() {
            return instant.toString();
        }
    }

    static StartPosition earliest() {
        return new Earliest();
    }

    static StartPosition latest() {
        return new Latest();
    }

    static StartPosition at(Instant instant) {
        return new At(instant);
    }
}
