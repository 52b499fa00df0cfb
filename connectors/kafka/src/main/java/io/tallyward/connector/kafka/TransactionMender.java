package io.tallyward.connector.kafka;

import java.time.Duration;
import java.util.ArrayList;
import java.util.HashMap;
import java.util.HashSet;
import java.util.LinkedHashMap;
import java.util.List;
import java.util.Map;
import java.util.Optional;
import java.util.Set;
import java.util.TreeMap;
import java.util.function.Supplier;
import org.apache.kafka.clients.consumer.Consumer;
import org.apache.kafka.clients.consumer.OffsetAndMetadata;
import org.apache.kafka.clients.producer.Producer;
import org.apache.kafka.common.KafkaException;
import org.apache.kafka.common.TopicPartition;
import org.apache.kafka.common.errors.InterruptException;
import org.apache.kafka.common.errors.TimeoutException;
import org.apache.kafka.common.errors.WakeupException;
import org.apache.kafka.common.utils.Utils;
import org.slf4j.Logger;
import org.slf4j.LoggerFactory;

/**
 * Ends transactions of the group that their coordinator believes ended and some partitions do not (see {@link OwedMarker}),
 * by telling these partitions what the coordinator has decided, and nothing else. Where that is not certain it only says
 * what is open and where, because a wrong guess would lose or repeat counts.
 *
 * <ul>
 *   <li>An owed abort is written by the administration client.
 *   <li>An owed commit cannot be written by any client as such. But the end of a transaction ends whatever its producer has
 *       open in the partitions that it touches; so one more transaction is made under the same transactional id, with a
 *       {@link Filler} in each of the partitions, and committed. It must not fail half-way: an abort would be told to the
 *       partitions that it has touched by then. It takes some milliseconds, and is left alone unless the worker has just
 *       proved to be a member.
 * </ul>
 *
 * <p>A worker mends what was written under its own ids, when it has none of them in use. What was left by workers that the
 * group no longer knows is mended by the worker that was given partition 0, so that no two do the same.
 */
final class TransactionMender {

    /** Each waits for as long as the producer's max.block.ms. */
    private static final int MOST_COMMIT_ATTEMPTS = 6;

    private static final Logger LOG = LoggerFactory.getLogger(TransactionMender.class);

    static final String OFFSETS_TOPIC = "__consumer_offsets";

    private static final Duration PATIENCE = Duration.ofSeconds(2);

    private final ShardGroup group;
    private final Clients clients;
    private final Cluster cluster;
    private final Consumer<byte[], byte[]> consumer;
    private final Runnable retire;
    private final int partitions;
    private final Set<OpenTransaction> said = new HashSet<>();
    private Set<OpenTransaction> seen = Set.of();

    /** What was told its end, and was not seen since, with the word for its end. */
    private final Map<OpenTransaction, String> mended = new LinkedHashMap<>();

    private List<OpenTransaction> undecided = List.of();

    /** @param retire has the worker's own producer put aside, so that its id is not in use */
    TransactionMender(
            ShardGroup group,
            Clients clients,
            Cluster cluster,
            Consumer<byte[], byte[]> consumer,
            int partitions,
            Runnable retire) {
        this.group = group;
        this.clients = clients;
        this.cluster = cluster;
        this.consumer = consumer;
        this.partitions = partitions;
        this.retire = retire;
    }

    /**
     * What was open at one moment.
     *
     * @param open every open transaction in what the group writes
     * @param lasting those that were open at the last look too, by producer
     */
    record Sighting(Set<OpenTransaction> open, List<Lasting> lasting) {}

    /**
     * A producer's transactions that have been open for some time.
     *
     * @param open in some partitions
     * @param known what their coordinator knows
     * @param numbered whether the brokers number transactions
     * @param members client ids of the group's members
     */
    record Lasting(
            List<OpenTransaction> open,
            Optional<CoordinatedTransaction> known,
            boolean numbered,
            Set<String> members) {}

    /**
     * Prepares the question for open transactions in all that the group writes. It may be put by any thread, and may take
     * seconds. What the brokers do not answer or do not permit is left for the next.
     */
    Supplier<Sighting> question() {
        Set<OpenTransaction> before = seen;
        return () -> {
            Set<OpenTransaction> open = Set.copyOf(cluster.openTransactions(written()));
            Map<Long, List<OpenTransaction>> lasting = new TreeMap<>();
            for (OpenTransaction transaction : open) {
                if (before.contains(transaction)) {
                    lasting.computeIfAbsent(transaction.producerId(), id -> new ArrayList<>())
                            .add(transaction);
                }
            }
            List<Lasting> found = new ArrayList<>();
            lasting.forEach((producerId, transactions) -> found.add(new Lasting(
                    transactions,
                    cluster.coordinated(producerId),
                    cluster.numbersTransactions(),
                    cluster.memberClientIds(group.id()))));
            return new Sighting(open, found);
        };
    }

    /**
     * Mends what has been open for some time.
     *
     * @param caretaker whether this worker sees to what nobody else does
     */
    void mend(Sighting sighting, boolean caretaker) {
        seen = sighting.open();
        said.retainAll(seen);
        tellEnded();
        List<OpenTransaction> left = new ArrayList<>();
        try {
            sighting.lasting().forEach(lasting -> left.addAll(consider(lasting, caretaker)));
            undecided = left;
        } catch (WakeupException | InterruptException stop) {
            throw stop;
        } catch (KafkaException unanswered) {
            LOG.debug("{}: open transactions could not be ended", group.id(), unanswered);
        }
    }

    /** What is open, will not end by itself, and cannot be ended here. */
    List<OpenTransaction> undecided() {
        return undecided;
    }

    private List<TopicPartition> written() {
        Map<String, Integer> topics = new HashMap<>();
        topics.put(group.stateTopic(), partitions);
        group.internalTopics().apply(partitions).forEach(topic -> topics.put(topic.name(), topic.partitions()));
        List<TopicPartition> written = new ArrayList<>();
        topics.forEach((topic, count) -> {
            for (int partition = 0; partition < count; partition++) {
                written.add(new TopicPartition(topic, partition));
            }
        });
        Integer offsets = cluster.partitions(List.of(OFFSETS_TOPIC)).get(OFFSETS_TOPIC);
        if (offsets != null) {
            written.add(new TopicPartition(OFFSETS_TOPIC, Utils.abs(group.id().hashCode()) % offsets));
        }
        return written;
    }

    /** Returns what stays open. */
    private List<OpenTransaction> consider(Lasting lasting, boolean caretaker) {
        Optional<CoordinatedTransaction> known = lasting.known();
        if (known.isPresent() && !ClientSettings.isOurs(group, known.get().transactionalId())) {
            return List.of();
        }
        Map<OwedMarker, List<OpenTransaction>> owed = new TreeMap<>();
        lasting.open()
                .forEach(transaction -> owed.computeIfAbsent(
                                OwedMarker.of(transaction, known, lasting.numbered()), marker -> new ArrayList<>())
                        .add(transaction));
        List<OpenTransaction> unknown = owed.getOrDefault(OwedMarker.UNKNOWN, List.of());
        unknown.forEach(this::say);
        if (known.isPresent() && isMine(known.get().transactionalId(), caretaker, lasting.members())) {
            commit(known.get(), owed.getOrDefault(OwedMarker.COMMIT, List.of()));
            abort(owed.getOrDefault(OwedMarker.ABORT, List.of()));
        }
        return unknown;
    }

    private boolean isMine(String transactionalId, boolean caretaker, Set<String> members) {
        String worker = transactionalId.substring(0, transactionalId.lastIndexOf('-'));
        String own = clients.lastTransactionalId()
                .map(id -> id.substring(0, id.lastIndexOf('-')))
                .orElse("");
        return worker.equals(own) || caretaker && !members.contains(worker);
    }

    private void abort(List<OpenTransaction> open) {
        open.forEach(cluster::abort);
        told(open, "aborted");
    }

    /** Says what was done; that it has worked is said when it has been seen. */
    private void told(List<OpenTransaction> open, String end) {
        if (!open.isEmpty()) {
            open.forEach(transaction -> mended.put(transaction, end));
            LOG.warn(
                    "{}: a transaction that its coordinator had {} was still open in {}; they have been told so, and are"
                            + " looked at again",
                    group.id(),
                    end,
                    partitions(open));
        }
    }

    private void tellEnded() {
        Map<String, List<OpenTransaction>> ended = new TreeMap<>();
        mended.forEach((transaction, end) -> {
            if (!seen.contains(transaction)) {
                ended.computeIfAbsent(end, word -> new ArrayList<>()).add(transaction);
            }
        });
        ended.forEach((end, transactions) -> {
            mended.keySet().removeAll(transactions);
            LOG.info(
                    "{}: the transaction that was {} is no longer open in {}",
                    group.id(),
                    end,
                    partitions(transactions));
        });
    }

    private static List<TopicPartition> partitions(List<OpenTransaction> transactions) {
        return transactions.stream().map(OpenTransaction::partition).toList();
    }

    private void commit(CoordinatedTransaction known, List<OpenTransaction> open) {
        if (open.isEmpty()) {
            return;
        }
        // Offsets of a topic that the group does not read say nothing; committing them proves membership.
        Map<TopicPartition, OffsetAndMetadata> nothing =
                Map.of(new TopicPartition(group.stateTopic(), 0), new OffsetAndMetadata(0));
        consumer.commitSync(nothing, PATIENCE);
        retire.run();
        if (cluster.coordinated(known.producerId()).equals(Optional.of(known))) {
            commitAgain(known.transactionalId(), open, nothing);
            told(open, "committed");
        }
        cluster.forgetOffsets(group.id(), nothing.keySet());
    }

    private void commitAgain(
            String transactionalId, List<OpenTransaction> open, Map<TopicPartition, OffsetAndMetadata> nothing) {
        Producer<byte[], byte[]> producer = clients.standIn(transactionalId);
        try {
            producer.initTransactions();
            producer.beginTransaction();
            // What can be refused comes first: an abort of records would reach the partitions that are owed a commit.
            if (open.stream().anyMatch(each -> each.partition().topic().equals(OFFSETS_TOPIC))) {
                producer.sendOffsetsToTransaction(nothing, consumer.groupMetadata());
            }
            for (OpenTransaction transaction : open) {
                if (!transaction.partition().topic().equals(OFFSETS_TOPIC)) {
                    producer.send(Filler.to(transaction.partition()));
                }
            }
            commitUntilAnswered(producer);
        } catch (KafkaException failure) {
            LOG.warn(
                    "{}: a transaction that its coordinator has committed is open in {}, and committing it there failed: {}",
                    group.id(),
                    open.stream().map(OpenTransaction::partition).toList(),
                    BrokerSentence.of(failure, group.broker()).text());
            throw failure;
        } finally {
            producer.close(Duration.ZERO);
        }
    }

    /** A commit in doubt may be asked for again, and must be: giving up would let the coordinator abort it. */
    private static void commitUntilAnswered(Producer<byte[], byte[]> producer) {
        for (int attempt = 1; ; attempt++) {
            try {
                producer.commitTransaction();
                return;
            } catch (TimeoutException inDoubt) {
                if (attempt == MOST_COMMIT_ATTEMPTS) {
                    throw inDoubt;
                }
            }
        }
    }

    private void say(OpenTransaction transaction) {
        if (said.add(transaction)) {
            LOG.warn("{}: {}", group.id(), remedy(transaction, group.broker()));
        }
    }

    /** What an operator has to know and to decide. */
    static String remedy(OpenTransaction transaction, String broker) {
        return "a transaction of producer " + transaction.producerId() + " is open in " + transaction.partition()
                + " from offset " + transaction.startOffset()
                + " and will not end by itself, and its coordinator no longer"
                + " tells how it ended: if its records may be lost, stop all instances, abort it with "
                + transaction.abortCommand(broker) + " and start again; if not, start under a new name";
    }
}
