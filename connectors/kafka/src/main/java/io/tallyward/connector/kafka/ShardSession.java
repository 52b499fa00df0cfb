package io.tallyward.connector.kafka;

import java.time.Duration;
import java.time.InstantSource;
import java.util.ArrayList;
import java.util.HashMap;
import java.util.List;
import java.util.Map;
import java.util.Optional;
import java.util.OptionalLong;
import java.util.function.BooleanSupplier;
import org.apache.kafka.clients.consumer.CloseOptions;
import org.apache.kafka.clients.consumer.Consumer;
import org.apache.kafka.clients.consumer.ConsumerRecord;
import org.apache.kafka.clients.consumer.ConsumerRecords;
import org.apache.kafka.clients.consumer.OffsetAndMetadata;
import org.apache.kafka.clients.consumer.OffsetOutOfRangeException;
import org.apache.kafka.common.KafkaException;
import org.apache.kafka.common.TopicPartition;
import org.apache.kafka.common.errors.FencedInstanceIdException;
import org.apache.kafka.common.errors.WakeupException;
import org.slf4j.Logger;
import org.slf4j.LoggerFactory;

/**
 * One membership in the group: a consumer, its transactions, and the shards of the partitions it has been given. Driven
 * step by step by one thread, which is what the tests do too. A step that throws a {@link KafkaException} or a
 * {@link BrokerException} is followed by {@link #forget()}, or, if polling itself failed, by {@link #abandon()}.
 */
final class ShardSession {

    private static final Logger LOG = LoggerFactory.getLogger(ShardSession.class);

    private static final Duration POLL = Duration.ofMillis(100);

    /** Whoever stops in good order leaves the group, so that others go on at once, also if its name is kept. */
    private static final CloseOptions LEAVING = CloseOptions.timeout(Duration.ofSeconds(2))
            .withGroupMembershipOperation(CloseOptions.GroupMembershipOperation.LEAVE_GROUP);

    /** How long the inputs of one partition number may be with several members. */
    static final Duration APART = Duration.ofMinutes(1);

    /** A transaction of more input than this is committed before its time; it would take seconds and much memory. */
    static final int MOST_RECORDS = 1_000_000;

    /** The same for what shards have ready to be written, in bytes. */
    static final long MOST_PENDING_BYTES = 32L * 1024 * 1024;

    private final ShardGroup group;
    private final InstantSource clock;
    private final BooleanSupplier stopping;
    private final StatusBoard board;
    private final int partitions;
    private final Cluster cluster;
    private final Consumer<byte[], byte[]> consumer;
    private final Transactions transactions;
    private final ShardRestorer restorer;
    private final Contact contact;
    private final AssignedShards assigned;

    private final InputIdentity identity;
    private final TransactionMender mender;
    private final Upkeep upkeep;

    private long lastCycleMillis;
    private long apartSinceMillis;
    private long uncommittedRecords;
    private long cycles;
    private boolean pollFailed;
    private boolean outdated;

    /**
     * Connects, checks the topics and joins the group.
     *
     * @throws BrokerException if the topics are not as they have to be
     * @throws KafkaException if the broker does not answer
     */
    ShardSession(ShardGroup group, Clients clients, InstantSource clock, BooleanSupplier stopping, StatusBoard board) {
        this.group = group;
        this.clock = clock;
        this.stopping = stopping;
        this.board = board;
        this.cluster = clients.cluster();
        try {
            this.partitions = GroupLayout.resolve(group, cluster);
            this.identity = new InputIdentity(group, cluster, partitions);
            this.consumer = clients.input();
        } catch (RuntimeException failure) {
            cluster.close();
            throw failure;
        }
        this.transactions = new Transactions(clients, cluster);
        this.contact = new Contact(consumer, cluster);
        this.restorer = new ShardRestorer(group, clients, cluster, consumer, identity, partitions, clock);
        this.mender = new TransactionMender(group, clients, cluster, consumer, partitions, transactions::retire);
        this.assigned = new AssignedShards(consumer, group.inputTopics().size(), partitions, new Consequences());
        this.lastCycleMillis = clock.millis();
        this.upkeep = new Upkeep(identity, mender, clients.aside(), lastCycleMillis);
        this.apartSinceMillis = lastCycleMillis;
        consumer.subscribe(group.inputTopics(), assigned);
    }

    /** Brings a shard forward that waits to be restored, reads once, and commits if it is time to. */
    void step() {
        if (assigned.layoutChanged()) {
            throw new BrokerException("a topic of " + group.inputTopics() + " has grown beyond " + partitions
                    + " partitions on " + group.broker() + ": its shards are being laid out anew");
        }
        if (assigned.incomplete().isEmpty()) {
            apartSinceMillis = clock.millis();
        }
        Optional<Integer> next = restorer.next(assigned.waiting());
        if (next.isPresent()) {
            restore(next.get());
        }
        apply(poll());
        board.restoring(restorer.progress(assigned.waiting()));
        board.hosting(assigned.running().keySet());
        long now = clock.millis();
        if (Elapsed.since(lastCycleMillis, now, group.commitInterval())) {
            lastCycleMillis = now;
            cycle(now);
        } else if (uncommittedRecords >= MOST_RECORDS || pendingBytes() >= MOST_PENDING_BYTES) {
            commit();
        }
    }

    private long pendingBytes() {
        long bytes = 0;
        for (GuardedShard shard : assigned.running().values()) {
            bytes += shard.pendingBytes();
        }
        return bytes;
    }

    private void restore(int partition) {
        transactions.ready();
        restorer.advance(partition, assigned::inputs, stopping).ifPresent(restored -> {
            assigned.started(partition, restored);
            board.restored(Math.max(1, clock.millis() - restored.startedMillis()));
        });
        if (!assigned.hasWaiting()) {
            restorer.pause();
        }
    }

    private ConsumerRecords<byte[], byte[]> poll() {
        ConsumerRecords<byte[], byte[]> records;
        try {
            records = consumer.poll(restorer.next(assigned.waiting()).isPresent() ? Duration.ZERO : untilNextCycle());
        } catch (OffsetOutOfRangeException deleted) {
            skipDeleted(deleted);
            records = ConsumerRecords.empty();
        } catch (FencedInstanceIdException taken) {
            throw new ShardFailure(
                    "another instance has started as " + group.member().orElse("?") + " in group " + group.id()
                            + ": this one stops; give every instance that runs a kafka.instance of its own",
                    taken);
        } catch (WakeupException stop) {
            throw stop;
        } catch (RuntimeException failure) {
            pollFailed = true;
            throw failure;
        } finally {
            assigned.throwCallbackFailure();
        }
        return records;
    }

    /** A commit is not put off by waiting for records, which matters where the interval is short. */
    private Duration untilNextCycle() {
        long left = lastCycleMillis + group.commitInterval().toMillis() - clock.millis();
        return Duration.ofMillis(Math.max(1, Math.min(POLL.toMillis(), left)));
    }

    private void skipDeleted(OffsetOutOfRangeException deleted) {
        verified(() -> identity.verify(identity.find()));
        Map<TopicPartition, Long> wanted = deleted.offsetOutOfRangePartitions();
        Map<TopicPartition, Long> oldest = consumer.beginningOffsets(wanted.keySet());
        wanted.forEach((partition, offset) -> {
            String sentence = "records of " + partition + " from offset " + offset + " to " + oldest.get(partition)
                    + " were gone before they could be read: reading goes on with what is left;"
                    + " give the topic a longer retention than the longest stop";
            LOG.warn(sentence);
            board.error(sentence);
            consumer.seek(partition, oldest.get(partition));
        });
    }

    private void apply(ConsumerRecords<byte[], byte[]> records) {
        for (TopicPartition partition : records.partitions()) {
            GuardedShard shard = assigned.running().get(partition.partition());
            if (shard == null) {
                throw new IllegalStateException(partition + " delivered records without a shard to take them");
            }
            for (ConsumerRecord<byte[], byte[]> record : records.records(partition)) {
                shard.apply(record);
            }
        }
        uncommittedRecords += records.count();
        board.consumed(records.count());
    }

    private void cycle(long nowMillis) {
        contact.refresh(nowMillis);
        assigned.running()
                .forEach((partition, shard) ->
                        shard.passTime(nowMillis, topic -> contact.caughtUp(new TopicPartition(topic, partition))));
        commit();
        board.lag(lag());
        if (trouble().isEmpty() && !assigned.hasWaiting()) {
            cycles++;
        }
        verified(() -> upkeep.see(nowMillis, contact.trouble().isEmpty(), assigned.holds(0)));
    }

    private void verified(Runnable look) {
        try {
            look.run();
        } catch (BrokerException changed) {
            outdated = true;
            throw changed;
        }
    }

    private void commit() {
        List<Output> outputs = new ArrayList<>();
        assigned.running().values().forEach(shard -> outputs.addAll(shard.drain()));
        Map<TopicPartition, Long> positions = assigned.positions();
        uncommittedRecords = 0;
        if (outputs.isEmpty() && assigned.isCommitted(positions)) {
            return;
        }
        try {
            Map<TopicPartition, OffsetAndMetadata> offsets = new HashMap<>();
            positions.forEach((input, position) -> offsets.put(input, identity.offset(input, position)));
            transactions.commit(outputs, offsets, consumer.groupMetadata());
        } catch (RuntimeException failure) {
            board.aborted();
            throw failure;
        }
        assigned.committed(positions);
        board.committed(clock.instant());
    }

    /** Called by the consumer while it polls or closes: the last chance to make the shards' work durable. */
    private void commitBeforeRevocation() {
        try {
            commit();
        } catch (KafkaException | BrokerException failure) {
            LOG.info(
                    "{}: the last commit before letting go failed and will be repeated by whoever takes over: {}",
                    group.id(),
                    BrokerSentence.of(failure, group.broker()).text());
            assigned.forgetRunning();
        }
    }

    private OptionalLong lag() {
        long sum = 0;
        for (TopicPartition partition : assigned.positions().keySet()) {
            OptionalLong lag = consumer.currentLag(partition);
            if (lag.isEmpty()) {
                return OptionalLong.empty();
            }
            sum += lag.getAsLong();
        }
        return OptionalLong.of(sum);
    }

    /** Throws all shards away, to be restored; keeps the membership. */
    void forget() {
        assigned.forgetRunning();
        restorer.pause();
        uncommittedRecords = 0;
        board.hosting(List.of());
    }

    /** Stays a member of the group while nothing else is to be done. */
    void keepMembership() {
        poll();
    }

    /** Whether the membership itself is beyond use. */
    boolean mustBeAbandoned() {
        return pollFailed || outdated || assigned.layoutChanged();
    }

    /** How many commit cycles have ended well, with all shards restored and all brokers answering. */
    long cycles() {
        return cycles;
    }

    boolean restoring() {
        return assigned.hasWaiting();
    }

    /** What the session is doing as long as nothing is wrong. */
    WorkerState state() {
        if (restoring()) {
            return WorkerState.RESTORING;
        }
        return assigned.joined() ? WorkerState.RUNNING : WorkerState.STARTING;
    }

    /** What keeps the session from doing all of its work, although it can do some. */
    Optional<RuntimeException> trouble() {
        if (contact.trouble().isPresent()) {
            return Optional.of(contact.trouble().get());
        }
        Optional<String> obstacle = restorer.obstacle().map(blocked -> blocked + remedy());
        return obstacle.or(this::apart).map(BrokerException::new);
    }

    /** The broker may move the partitions of one number one after the other, but not for long. */
    private Optional<String> apart() {
        if (assigned.incomplete().isEmpty() || !Elapsed.since(apartSinceMillis, clock.millis(), APART)) {
            return Optional.empty();
        }
        int number = assigned.incomplete().first();
        return Optional.of("partition " + number + " of "
                + assigned.inputs(number).stream().map(TopicPartition::topic).toList()
                + " is here and of the other input topics is not, so that it is not counted: stop instances that have"
                + " another input.topics or another kafka.group-protocol under the group " + group.id());
    }

    private String remedy() {
        return mender.undecided().stream()
                .findFirst()
                .map(transaction -> "; " + TransactionMender.remedy(transaction, group.broker()))
                .orElse(": if it has hung, the instance that reads partition 0 ends it within half a minute, or its log"
                        + " says what to do");
    }

    void wakeup() {
        consumer.wakeup();
    }

    /** Commits a last time and leaves the group; a failure is logged, because whoever restarts repeats the work. */
    void finish() {
        try {
            commitBeforeRevocation();
        } finally {
            abandon();
        }
    }

    /** Leaves without committing. */
    void abandon() {
        try {
            assigned.releaseAll();
            restorer.forgetAll();
        } finally {
            restorer.pause();
            closeQuietly(() -> consumer.close(LEAVING));
            closeQuietly(transactions::close);
            closeQuietly(cluster::close);
            board.hosting(List.of());
        }
    }

    /** What follows from a change of the assignment. */
    private final class Consequences implements AssignedShards.Changes {
        @Override
        public void beforeRevocation() {
            commitBeforeRevocation();
        }

        @Override
        public void forget(int partition) {
            restorer.forget(partition);
        }

        @Override
        public void changed() {
            contact.reset();
        }
    }

    private void closeQuietly(Runnable close) {
        try {
            close.run();
        } catch (KafkaException failure) {
            LOG.debug("{}: a client did not close in order", group.id(), failure);
        }
    }
}
