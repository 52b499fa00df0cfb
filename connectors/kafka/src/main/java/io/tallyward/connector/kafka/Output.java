package io.tallyward.connector.kafka;

import java.util.Map;
import java.util.Objects;

/**
 * A record to be written. Arrays are handed over, not copied: whoever makes an output leaves them alone afterwards.
 *
 * @param topic where it goes
 * @param partition which partition it goes to; null lets the key decide
 * @param key may be null if the partition is given
 * @param value null removes the key from a compacted topic
 * @param headers in no particular order; may be empty
 */
public record Output(String topic, Integer partition, byte[] key, byte[] value, Map<String, byte[]> headers) {

    public Output {
        Objects.requireNonNull(topic, "topic");
        headers = Map.copyOf(headers);
        if (partition == null && key == null) {
            throw new IllegalArgumentException(
                    "output to " + topic + ": neither partition nor key (expected: one of them)");
        }
        if (partition != null && partition < 0) {
            throw new IllegalArgumentException("partition: " + partition + " (expected: 0 or more)");
        }
    }

    /** A record whose key decides its partition, without headers. */
    public static Output byKey(String topic, byte[] key, byte[] value) {
        return new Output(topic, null, key, value, Map.of());
    }

    /** A state record: it goes to the shard's own partition, whatever its key. */
    public static Output state(String stateTopic, int partition, byte[] key, byte[] value) {
        return new Output(stateTopic, partition, key, value, Map.of());
    }
}
