package io.tallyward.connector.kafka;

import java.time.Instant;
import java.util.Map;
import org.apache.kafka.common.TopicPartition;

/** Where the reading of a log begins, or where it ends. */
public sealed interface LogBound {

    /** As far as the log goes: with the oldest record it still holds, or before whatever is written from now on. */
    record Edge() implements LogBound {}

    /** In every partition at the first record whose timestamp is at or after a moment; an end leaves it out. */
    record At(Instant time) implements LogBound {}

    /** At an offset of each partition, which an end leaves out; partitions that are not named have their edge. */
    record Offsets(Map<TopicPartition, Long> offsets) implements LogBound {
        public Offsets {
            offsets = Map.copyOf(offsets);
        }
    }
}
