package io.tallyward.connector.kafka;

import java.util.Collection;
import java.util.Collections;
import java.util.HashMap;
import java.util.HashSet;
import java.util.Map;
import java.util.Set;
import java.util.TreeMap;
import java.util.TreeSet;
import org.apache.kafka.clients.consumer.Consumer;
import org.apache.kafka.clients.consumer.ConsumerRebalanceListener;
import org.apache.kafka.clients.consumer.OffsetAndMetadata;
import org.apache.kafka.common.TopicPartition;

/**
 * Which partition numbers a worker has been given, which of them wait for their shard to be restored, and which run. A
 * waiting partition is paused, so that nothing is read before there is a shard to take it.
 */
final class AssignedShards implements ConsumerRebalanceListener {

    private final Consumer<byte[], byte[]> consumer;
    private final int partitions;
    private final Runnable beforeRevocation;
    private final Runnable onChange;
    private final TreeMap<Integer, GuardedShard> running = new TreeMap<>();
    private final TreeSet<Integer> waiting = new TreeSet<>();
    private final Map<TopicPartition, Long> committed = new HashMap<>();
    private RuntimeException callbackFailure;
    private boolean joined;
    private boolean layoutChanged;

    /**
     * Starts with nothing assigned.
     *
     * @param partitions how many partitions the group's topics had when it was joined
     * @param beforeRevocation what to do while the partitions that are about to go still run
     * @param onChange what to do after any change
     */
    AssignedShards(Consumer<byte[], byte[]> consumer, int partitions, Runnable beforeRevocation, Runnable onChange) {
        this.consumer = consumer;
        this.partitions = partitions;
        this.beforeRevocation = beforeRevocation;
        this.onChange = onChange;
    }

    @Override
    public void onPartitionsAssigned(Collection<TopicPartition> given) {
        joined = true;
        for (TopicPartition partition : given) {
            if (partition.partition() >= partitions) {
                layoutChanged = true;
            }
            // Any position will do until the shard is restored; without one the consumer would look for its own.
            consumer.seek(partition, 0);
            waiting.add(partition.partition());
        }
        consumer.pause(given);
        onChange.run();
    }

    @Override
    public void onPartitionsRevoked(Collection<TopicPartition> taken) {
        try {
            beforeRevocation.run();
            release(taken);
        } catch (RuntimeException failure) {
            callbackFailure = failure;
        }
    }

    @Override
    public void onPartitionsLost(Collection<TopicPartition> taken) {
        try {
            release(taken);
        } catch (RuntimeException failure) {
            callbackFailure = failure;
        }
    }

    /** An exception must not pass through the consumer, which would wrap it and go on; it is kept until polling is over. */
    void throwCallbackFailure() {
        RuntimeException failure = callbackFailure;
        callbackFailure = null;
        if (failure != null) {
            throw failure;
        }
    }

    private void release(Collection<TopicPartition> taken) {
        for (TopicPartition partition : taken) {
            committed.remove(partition);
            waiting.remove(partition.partition());
            GuardedShard shard = running.remove(partition.partition());
            if (shard != null) {
                shard.released();
            }
        }
        onChange.run();
    }

    /** The input partitions of a partition number that are assigned. */
    Set<TopicPartition> inputs(int partition) {
        Set<TopicPartition> inputs = new HashSet<>();
        for (TopicPartition input : consumer.assignment()) {
            if (input.partition() == partition) {
                inputs.add(input);
            }
        }
        return inputs;
    }

    /** Lets a restored shard read on from where it stands. */
    void started(int partition, ShardRestorer.Restored restored) {
        restored.positions().forEach(consumer::seek);
        committed.putAll(restored.committed());
        waiting.remove(partition);
        running.put(partition, restored.shard());
        consumer.resume(restored.positions().keySet());
    }

    /** How far the running shards have read. */
    Map<TopicPartition, OffsetAndMetadata> positions() {
        Map<TopicPartition, OffsetAndMetadata> positions = new HashMap<>();
        for (TopicPartition input : consumer.assignment()) {
            if (running.containsKey(input.partition())) {
                positions.put(input, new OffsetAndMetadata(consumer.position(input)));
            }
        }
        return positions;
    }

    boolean isCommitted(Map<TopicPartition, OffsetAndMetadata> positions) {
        return positions.entrySet().stream()
                .allMatch(position ->
                        Long.valueOf(position.getValue().offset()).equals(committed.get(position.getKey())));
    }

    void committed(Map<TopicPartition, OffsetAndMetadata> positions) {
        positions.forEach((input, position) -> committed.put(input, position.offset()));
        running.values().forEach(GuardedShard::committed);
    }

    /** Throws the running shards away and has them restored. */
    void forgetRunning() {
        consumer.pause(consumer.assignment());
        for (TopicPartition input : consumer.assignment()) {
            waiting.add(input.partition());
        }
        committed.clear();
        releaseAll();
    }

    /** Tells all running shards that they are let go. */
    void releaseAll() {
        try {
            running.values().forEach(GuardedShard::released);
        } finally {
            running.clear();
            onChange.run();
        }
    }

    Map<Integer, GuardedShard> running() {
        return Collections.unmodifiableMap(running);
    }

    boolean hasWaiting() {
        return !waiting.isEmpty();
    }

    int firstWaiting() {
        return waiting.first();
    }

    /** Whether the group has answered at least once, with or without partitions. */
    boolean joined() {
        return joined;
    }

    /** Whether a topic has grown partitions that no shard was planned for. */
    boolean layoutChanged() {
        return layoutChanged;
    }
}
