package io.tallyward.connector.kafka;

import java.time.Duration;
import java.time.InstantSource;
import java.util.Comparator;
import java.util.HashMap;
import java.util.HashSet;
import java.util.Map;
import java.util.NavigableSet;
import java.util.Optional;
import java.util.Set;
import java.util.TreeMap;
import java.util.function.BooleanSupplier;
import java.util.function.IntFunction;
import org.apache.kafka.clients.consumer.Consumer;
import org.apache.kafka.clients.consumer.OffsetAndMetadata;
import org.apache.kafka.common.KafkaException;
import org.apache.kafka.common.TopicPartition;
import org.apache.kafka.common.errors.TimeoutException;
import org.slf4j.Logger;
import org.slf4j.LoggerFactory;

/**
 * Brings shards back to where they were committed, a part at a time, so that the worker's other shards go on. The order
 * matters: first the committed offsets, read under {@code read_committed}, which the group coordinator answers only when no
 * transaction that carries offsets of these partitions is pending (KIP-447); only then the state. The other way round, a
 * paused predecessor might commit between the two, and its state would be missed while its offsets were believed.
 *
 * <p>A shard that cannot be brought forward, because a transaction does not end, stands back for the others.
 */
final class ShardRestorer {

    private static final Logger LOG = LoggerFactory.getLogger(ShardRestorer.class);

    /** How long to wait for committed offsets before the others have their turn. */
    private static final Duration OFFSETS_PATIENCE = Duration.ofSeconds(1);

    /** How long to wait for state: a busy broker takes a moment, but a transaction that hangs does not end sooner. */
    static final Duration READING_PATIENCE = Duration.ofMillis(500);

    /** How long a shard that cannot be brought forward stands back. */
    static final Duration STANDS_BACK = Duration.ofSeconds(1);

    /** Longer than a transaction can stay open that its coordinator knows of. */
    static final Duration TOO_LONG = Duration.ofSeconds(30);

    private final ShardGroup group;
    private final Clients clients;
    private final Cluster cluster;
    private final Consumer<byte[], byte[]> consumer;
    private final int partitions;
    private final InputIdentity identity;
    private final InstantSource clock;
    private final RestoreLog log;
    private final Map<Integer, Restoration> begun = new TreeMap<>();
    private final Map<Integer, Long> nextTurn = new HashMap<>();
    private StateReader reader;
    private int last = -1;

    /**
     * A shard that stands where the group has committed.
     *
     * @param shard restored, and told that this is durable
     * @param positions where to read on in each input partition
     * @param committed those of the positions that the group has committed
     * @param startedMillis when its restoration began
     */
    record Restored(
            GuardedShard shard,
            Map<TopicPartition, Long> positions,
            Map<TopicPartition, Long> committed,
            long startedMillis) {}

    ShardRestorer(
            ShardGroup group,
            Clients clients,
            Cluster cluster,
            Consumer<byte[], byte[]> consumer,
            InputIdentity identity,
            int partitions,
            InstantSource clock) {
        this.group = group;
        this.clients = clients;
        this.cluster = cluster;
        this.consumer = consumer;
        this.identity = identity;
        this.partitions = partitions;
        this.clock = clock;
        this.log = new RestoreLog(group);
    }

    /** Whose turn it is; empty while all that wait stand back. The one that is being read goes on until it is done. */
    Optional<Integer> next(NavigableSet<Integer> waiting) {
        if (waiting.contains(last) && ready(last)) {
            return Optional.of(last);
        }
        return waiting.stream()
                .filter(this::ready)
                .min(Comparator.comparing((Integer partition) -> partition <= last)
                        .thenComparing(Comparator.naturalOrder()));
    }

    private boolean ready(int partition) {
        Long blocked = nextTurn.get(partition);
        return blocked == null || Elapsed.since(blocked, clock.millis(), STANDS_BACK);
    }

    /**
     * Brings a shard forward.
     *
     * @param inputs the input partitions of a partition number
     * @return the shard, if that is all
     */
    Optional<Restored> advance(int partition, IntFunction<Set<TopicPartition>> inputs, BooleanSupplier stopping) {
        last = partition;
        Restoration restoration = begun.computeIfAbsent(
                partition, number -> new Restoration(number, inputs.apply(number), clock.millis()));
        boolean done = false;
        try {
            Optional<Restored> restored = advance(restoration, stopping);
            done = true;
            return restored;
        } finally {
            if (!done) {
                forget(partition);
                pause();
            }
        }
    }

    private Optional<Restored> advance(Restoration restoration, BooleanSupplier stopping) {
        if (restoration.committed().isEmpty() && !offsetsDecided(restoration)) {
            return standBack(restoration);
        }
        if (reader == null) {
            reader = new StateReader(clients.state(), cluster, group.stateTopic());
        }
        if (restoration.shard().isEmpty()) {
            restoration.shard(new GuardedShard(group, restoration.partition(), partitions));
            reader.begin(restoration);
            log.begins(restoration, clock.millis());
        }
        boolean moved = reader.advance(restoration, stopping);
        if (restoration.complete()) {
            return Optional.of(end(restoration));
        }
        log.goesOn(restoration, clock.millis());
        if (moved) {
            restoration.unblocked();
            return Optional.empty();
        }
        restoration.blocked(
                "restoring from " + new TopicPartition(group.stateTopic(), restoration.partition())
                        + " stands still at offset " + restoration.position() + ", " + restoration.remaining()
                        + " before the end: a broker is missing, or a transaction there does not end",
                clock.millis());
        return Elapsed.since(restoration.blockedMillis(), clock.millis(), READING_PATIENCE)
                ? standBack(restoration)
                : Optional.empty();
    }

    private Restored end(Restoration restoration) {
        Map<TopicPartition, Long> committed = restoration.committed().orElseThrow();
        Map<TopicPartition, Long> positions = restoration.positions();
        positions.putAll(newPartitions(restoration, committed.keySet()));
        GuardedShard shard = restoration.shard().orElseThrow();
        shard.committed();
        log.ends(restoration, clock.millis());
        begun.remove(restoration.partition());
        nextTurn.remove(restoration.partition());
        return new Restored(shard, positions, committed, restoration.startedMillis());
    }

    private Optional<Restored> standBack(Restoration restoration) {
        nextTurn.put(restoration.partition(), clock.millis());
        return Optional.empty();
    }

    /** A broker that answers everything else and not this has a transaction with these offsets in it that does not end. */
    private boolean offsetsDecided(Restoration restoration) {
        Map<TopicPartition, OffsetAndMetadata> found;
        try {
            found = consumer.committed(restoration.inputs(), OFFSETS_PATIENCE);
        } catch (TimeoutException undecided) {
            cluster.ping();
            restoration.blocked(
                    "the committed offsets of group " + group.id() + " for " + restoration.inputs()
                            + " are undecided on " + group.broker() + ", because a transaction does not end",
                    clock.millis());
            return false;
        }
        Map<TopicPartition, Long> committed = new HashMap<>();
        found.forEach((input, offset) -> {
            if (offset != null) {
                identity.check(input, offset);
                committed.put(input, offset.offset());
            }
        });
        restoration.committed(committed);
        restoration.unblocked();
        return true;
    }

    /** What has stood in the way of a shard for longer than any transaction should; empty if nothing has. */
    Optional<String> obstacle() {
        return begun.values().stream()
                .filter(restoration -> restoration.obstacle().isPresent()
                        && Elapsed.since(restoration.blockedMillis(), clock.millis(), TOO_LONG))
                .flatMap(restoration -> restoration.obstacle().stream())
                .findFirst();
    }

    RestoreProgress progress(NavigableSet<Integer> waiting) {
        long remaining = 0;
        long total = 0;
        for (Restoration restoration : begun.values()) {
            remaining += restoration.remaining();
            total += restoration.total();
        }
        Restoration current = begun.get(last);
        return new RestoreProgress(
                waiting.stream().toList(),
                last,
                current == null ? 0 : current.records(),
                current == null ? 0 : current.bytes(),
                remaining,
                total);
    }

    /** Throws away what has been learnt for a partition number. */
    void forget(int partition) {
        nextTurn.remove(partition);
        Restoration restoration = begun.remove(partition);
        if (restoration != null) {
            restoration.shard().ifPresent(GuardedShard::released);
        }
    }

    void forgetAll() {
        Set.copyOf(begun.keySet()).forEach(this::forget);
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

    private Map<TopicPartition, Long> newPartitions(Restoration restoration, Set<TopicPartition> committed) {
        Set<TopicPartition> unknown = new HashSet<>(restoration.inputs());
        unknown.removeAll(committed);
        if (!unknown.isEmpty() && restoration.records() > 0) {
            GuardedShard shard = restoration.shard().orElseThrow();
            Set<TopicPartition> lost = new HashSet<>(unknown);
            lost.removeIf(input -> !shard.hasRead(input.topic()));
            if (!lost.isEmpty() && !group.rereads()) {
                throw new LostOffsetsException(group, lost);
            }
            LOG.warn(
                    "group {} has state but no committed offsets for {}, {}; reading there begins at {}",
                    group.id(),
                    unknown,
                    lost.isEmpty() ? "which is new among its input topics" : "which the broker has forgotten",
                    group.start());
        }
        return new StartOffsets(consumer, group.start()).of(unknown);
    }
}
