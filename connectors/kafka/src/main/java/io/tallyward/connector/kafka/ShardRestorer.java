package io.tallyward.connector.kafka;

import java.time.Duration;
import java.util.HashMap;
import java.util.HashSet;
import java.util.Map;
import java.util.Set;
import java.util.function.BooleanSupplier;
import org.apache.kafka.clients.consumer.Consumer;
import org.apache.kafka.clients.consumer.OffsetAndMetadata;
import org.apache.kafka.common.KafkaException;
import org.apache.kafka.common.TopicPartition;
import org.apache.kafka.common.errors.TimeoutException;
import org.slf4j.Logger;
import org.slf4j.LoggerFactory;

/**
 * Brings a shard back to where it was committed. The order matters: first the committed offsets, read under
 * {@code read_committed}, which the group coordinator answers only when no transaction that carries offsets of these
 * partitions is pending (KIP-447); only then the state. The other way round, a paused predecessor might commit between
 * the two, and its state would be missed while its offsets were believed.
 */
final class ShardRestorer {

    private static final Logger LOG = LoggerFactory.getLogger(ShardRestorer.class);

    /** Longer than a transaction can stay open. */
    private static final Duration OFFSETS_PATIENCE = Duration.ofSeconds(30);

    private final ShardGroup group;
    private final Clients clients;
    private final Cluster cluster;
    private final Consumer<byte[], byte[]> consumer;
    private final int partitions;
    private StateReader reader;

    /**
     * A shard that stands where the group has committed.
     *
     * @param shard restored, and told that this is durable
     * @param positions where to read on in each input partition
     * @param committed those of the positions that the group has committed
     */
    record Restored(GuardedShard shard, Map<TopicPartition, Long> positions, Map<TopicPartition, Long> committed) {}

    ShardRestorer(
            ShardGroup group, Clients clients, Cluster cluster, Consumer<byte[], byte[]> consumer, int partitions) {
        this.group = group;
        this.clients = clients;
        this.cluster = cluster;
        this.consumer = consumer;
        this.partitions = partitions;
    }

    Restored restore(int partition, Set<TopicPartition> inputs, BooleanSupplier stopping) {
        Map<TopicPartition, Long> committed = new HashMap<>();
        committedOffsets(inputs).forEach((input, offset) -> keep(committed, input, offset));
        GuardedShard shard = new GuardedShard(group, partition, partitions);
        boolean done = false;
        try {
            if (reader == null) {
                reader = new StateReader(clients.state(), cluster, group.stateTopic());
            }
            long records = reader.restore(partition, shard, stopping);
            Map<TopicPartition, Long> positions = new HashMap<>(committed);
            positions.putAll(newPartitions(inputs, committed.keySet(), records));
            shard.committed();
            done = true;
            return new Restored(shard, positions, committed);
        } finally {
            if (!done) {
                shard.released();
                pause();
            }
        }
    }

    /** A broker that answers everything else and not this has a transaction with these offsets in it that does not end. */
    private Map<TopicPartition, OffsetAndMetadata> committedOffsets(Set<TopicPartition> inputs) {
        try {
            return consumer.committed(inputs, OFFSETS_PATIENCE);
        } catch (TimeoutException undecided) {
            cluster.ping();
            throw new BrokerException(
                    "the committed offsets of group " + group.id() + " for " + inputs + " are undecided on "
                            + group.broker() + ", because a transaction does not end: wait a minute, and if this stays,"
                            + " have Kafka's kafka-transactions.sh find-hanging look for it and abort it",
                    undecided);
        }
    }

    /** Lets go of the state reader until a shard is to be restored again. */
    void pause() {
        if (reader == null) {
            return;
        }
        StateReader open = reader;
        reader = null;
        try {
            open.close();
        } catch (KafkaException failure) {
            LOG.debug("{}: the state reader did not close in order", group.id(), failure);
        }
    }

    private Map<TopicPartition, Long> newPartitions(
            Set<TopicPartition> inputs, Set<TopicPartition> committed, long stateRecords) {
        Set<TopicPartition> unknown = new HashSet<>(inputs);
        unknown.removeAll(committed);
        if (!unknown.isEmpty() && stateRecords > 0) {
            LOG.warn(
                    "group {} has state but no committed offsets for {}: the broker has forgotten the offsets of a group"
                            + " that was stopped for long, or a topic was added; reading there begins at {}",
                    group.id(),
                    unknown,
                    group.start());
        }
        return new StartOffsets(consumer, group.start()).of(unknown);
    }

    private static void keep(Map<TopicPartition, Long> offsets, TopicPartition input, OffsetAndMetadata offset) {
        if (offset != null) {
            offsets.put(input, offset.offset());
        }
    }
}
