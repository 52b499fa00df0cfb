package io.tallyward.connector.kafka;

import java.util.HashMap;
import java.util.Map;
import java.util.Optional;
import java.util.Set;
import org.apache.kafka.clients.consumer.ConsumerRecord;
import org.apache.kafka.common.TopicPartition;

/** A shard on its way back: what has been learnt so far, so that another may be brought forward in between. */
final class Restoration {

    private final int partition;
    private final Set<TopicPartition> inputs;
    private final long startedMillis;
    private Map<TopicPartition, Long> committed;
    private GuardedShard shard;
    private long first;
    private long end;
    private long position;
    private long records;
    private long bytes;
    private String obstacle;
    private long blockedMillis;

    Restoration(int partition, Set<TopicPartition> inputs, long nowMillis) {
        this.partition = partition;
        this.inputs = Set.copyOf(inputs);
        this.startedMillis = nowMillis;
    }

    int partition() {
        return partition;
    }

    Set<TopicPartition> inputs() {
        return inputs;
    }

    /** What the group has committed; empty while that is not known. */
    Optional<Map<TopicPartition, Long>> committed() {
        return Optional.ofNullable(committed);
    }

    void committed(Map<TopicPartition, Long> offsets) {
        committed = Map.copyOf(offsets);
    }

    /** The shard; empty while it has not been made. */
    Optional<GuardedShard> shard() {
        return Optional.ofNullable(shard);
    }

    void shard(GuardedShard made) {
        shard = made;
    }

    /** The state lies between two offsets. */
    void begin(long firstOffset, long endOffset) {
        first = firstOffset;
        position = firstOffset;
        end = endOffset;
    }

    /** How many of the last records the shard wants to see first. */
    int foresight() {
        return shard.foresight();
    }

    void foresee(ConsumerRecord<byte[], byte[]> record) {
        if (record.offset() < end && !Filler.is(record)) {
            shard.foresee(record);
        }
    }

    void take(ConsumerRecord<byte[], byte[]> record) {
        if (Filler.is(record)) {
            return;
        }
        shard.restore(record);
        records++;
        bytes += Math.max(0, record.serializedKeySize()) + Math.max(0, record.serializedValueSize());
    }

    void reached(long offset) {
        position = offset;
    }

    long position() {
        return position;
    }

    /** Where the state ends. */
    long end() {
        return end;
    }

    boolean complete() {
        return position >= end;
    }

    /** State records taken back so far. */
    long records() {
        return records;
    }

    /** Bytes of keys and values taken back so far. */
    long bytes() {
        return bytes;
    }

    /** Offsets still to be read; an upper bound of the records, since compaction leaves gaps. */
    long remaining() {
        return Math.max(0, end - position);
    }

    /** Offsets to be read in all. */
    long total() {
        return Math.max(0, end - first);
    }

    long startedMillis() {
        return startedMillis;
    }

    /** Something stands in the way, since now or since longer. */
    void blocked(String by, long nowMillis) {
        if (obstacle == null) {
            blockedMillis = nowMillis;
        }
        obstacle = by;
    }

    void unblocked() {
        obstacle = null;
    }

    /** What stands in the way; empty if nothing does. */
    Optional<String> obstacle() {
        return Optional.ofNullable(obstacle);
    }

    /** Since when something has stood in the way; meaningless if nothing does. */
    long blockedMillis() {
        return blockedMillis;
    }

    /** Where to read on, if nothing else is known: the committed offsets. */
    Map<TopicPartition, Long> positions() {
        return new HashMap<>(committed);
    }
}
