package io.tallyward.connector.kafka;

import java.util.Collection;
import java.util.Collections;
import java.util.HashMap;
import java.util.HashSet;
import java.util.Map;
import java.util.NavigableSet;
import java.util.Set;
import java.util.TreeMap;
import java.util.TreeSet;
import org.apache.kafka.clients.consumer.Consumer;
import org.apache.kafka.clients.consumer.ConsumerRebalanceListener;
import org.apache.kafka.common.TopicPartition;

/**
 * Which partition numbers a worker has been given, which of them wait for their shard to be restored, and which run. A
 * number is complete when its partition of every input topic is here; the new group protocol hands them over one by one, and
 * until the last has come, and from when the first has gone, the number has no shard. Whatever has no running shard is
 * paused, so that nothing is read before there is a shard to take it.
 */
final class AssignedShards implements ConsumerRebalanceListener {

    /** What has to be done when the assignment changes. */
    interface Changes {
        /** The partitions that are about to go still run: the last chance to make their work durable. */
        void beforeRevocation();

        /** A partition number is no longer what it was: whatever was being made for it is to be thrown away. */
        void forget(int partition);

        /** Something has changed. */
        void changed();
    }

    private final Consumer<byte[], byte[]> consumer;
    private final int inputTopics;
    private final int partitions;
    private final Changes changes;
    private final TreeMap<Integer, Set<TopicPartition>> given = new TreeMap<>();
    private final TreeMap<Integer, GuardedShard> running = new TreeMap<>();
    private final TreeSet<Integer> waiting = new TreeSet<>();
    private final Map<TopicPartition, Long> committed = new HashMap<>();
    private RuntimeException callbackFailure;
    private boolean joined;
    private boolean layoutChanged;

    /**
     * Starts with nothing assigned.
     *
     * @param inputTopics how many topics the group reads
     * @param partitions how many partitions the group's topics had when it was joined
     */
    AssignedShards(Consumer<byte[], byte[]> consumer, int inputTopics, int partitions, Changes changes) {
        this.consumer = consumer;
        this.inputTopics = inputTopics;
        this.partitions = partitions;
        this.changes = changes;
    }

    @Override
    public void onPartitionsAssigned(Collection<TopicPartition> added) {
        joined = true;
        try {
            take(added);
        } catch (RuntimeException failure) {
            callbackFailure = failure;
        }
    }

    private void take(Collection<TopicPartition> added) {
        for (TopicPartition partition : added) {
            if (partition.partition() >= partitions) {
                layoutChanged = true;
            }
            // Any position will do until the shard is restored; without one the consumer would look for its own.
            consumer.seek(partition, 0);
            given.computeIfAbsent(partition.partition(), number -> new HashSet<>())
                    .add(partition);
        }
        consumer.pause(added);
        added.forEach(partition -> startOver(partition.partition()));
        changes.changed();
    }

    @Override
    public void onPartitionsRevoked(Collection<TopicPartition> taken) {
        try {
            changes.beforeRevocation();
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
            given.getOrDefault(partition.partition(), new HashSet<>()).remove(partition);
        }
        for (TopicPartition partition : taken) {
            int number = partition.partition();
            Set<TopicPartition> left = inputs(number);
            left.forEach(committed::remove);
            if (!left.isEmpty()) {
                consumer.pause(left);
            }
            startOver(number);
        }
        changes.changed();
    }

    private void startOver(int number) {
        changes.forget(number);
        queue(number);
        GuardedShard shard = running.remove(number);
        if (shard != null) {
            shard.released();
        }
    }

    private void queue(int number) {
        Set<TopicPartition> inputs = inputs(number);
        if (inputs.size() == inputTopics) {
            waiting.add(number);
        } else {
            waiting.remove(number);
        }
        if (inputs.isEmpty()) {
            given.remove(number);
        }
    }

    /** The input partitions of a partition number that are assigned. */
    Set<TopicPartition> inputs(int partition) {
        return Set.copyOf(given.getOrDefault(partition, Set.of()));
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
    Map<TopicPartition, Long> positions() {
        Map<TopicPartition, Long> positions = new HashMap<>();
        for (TopicPartition input : consumer.assignment()) {
            if (running.containsKey(input.partition())) {
                positions.put(input, consumer.position(input));
            }
        }
        return positions;
    }

    boolean isCommitted(Map<TopicPartition, Long> positions) {
        return positions.entrySet().stream()
                .allMatch(position -> position.getValue().equals(committed.get(position.getKey())));
    }

    void committed(Map<TopicPartition, Long> positions) {
        committed.putAll(positions);
        running.values().forEach(GuardedShard::committed);
    }

    /** Throws the running shards away and has them restored. */
    void forgetRunning() {
        consumer.pause(consumer.assignment());
        committed.clear();
        try {
            releaseAll();
        } finally {
            Set.copyOf(given.keySet()).forEach(number -> {
                changes.forget(number);
                queue(number);
            });
        }
    }

    /** Tells all running shards that they are let go. */
    void releaseAll() {
        try {
            running.values().forEach(GuardedShard::released);
        } finally {
            running.clear();
            changes.changed();
        }
    }

    Map<Integer, GuardedShard> running() {
        return Collections.unmodifiableMap(running);
    }

    boolean hasWaiting() {
        return !waiting.isEmpty();
    }

    /** The complete numbers that have no shard yet. */
    NavigableSet<Integer> waiting() {
        return Collections.unmodifiableNavigableSet(waiting);
    }

    /** The numbers of which a partition of some input topic is here and one of another is not. */
    NavigableSet<Integer> incomplete() {
        TreeSet<Integer> incomplete = new TreeSet<>(given.keySet());
        incomplete.removeIf(number -> inputs(number).size() == inputTopics);
        return incomplete;
    }

    /** Whether a partition number is here, with or without a shard. */
    boolean holds(int partition) {
        return given.containsKey(partition);
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
