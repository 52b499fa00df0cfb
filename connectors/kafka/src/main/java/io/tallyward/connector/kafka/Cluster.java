package io.tallyward.connector.kafka;

import java.util.Collection;
import java.util.List;
import java.util.Map;
import java.util.Optional;
import java.util.Set;
import org.apache.kafka.common.TopicPartition;

/** What has to be asked of the brokers beside reading and writing. Every question is bounded in time. */
interface Cluster extends AutoCloseable {

    /** How many partitions each topic has; topics that do not exist are left out. */
    Map<String, Integer> partitions(Collection<String> topics);

    /** What tells each topic from an earlier one of the same name; topics that do not exist are left out. */
    Map<String, String> ids(Collection<String> topics);

    /** Creates a topic; one that exists already is left alone. */
    void create(InternalTopic topic);

    /** The high watermark: behind everything written, finished transaction or not. */
    long endOffset(TopicPartition partition);

    /** Returns if a broker answers. */
    void ping();

    /** The transactions open in some partitions; partitions that may not be asked about are left out. */
    List<OpenTransaction> openTransactions(Collection<TopicPartition> partitions);

    /** What is known of a producer's transactional id; empty if nothing is. */
    Optional<CoordinatedTransaction> coordinated(long producerId);

    /** What is known of a transactional id; empty if nothing is. */
    Optional<CoordinatedTransaction> coordinated(String transactionalId);

    /** The transactional ids whose last transaction is neither committed nor aborted, of all groups. */
    List<String> ongoingTransactions();

    /** Whether the end of every transaction raises its producer's epoch (KIP-890), on all brokers. */
    boolean numbersTransactions();

    /** Aborts a transaction in one partition, whatever its coordinator knows of it. */
    void abort(OpenTransaction transaction);

    /** The client ids of a group's members. */
    Set<String> memberClientIds(String group);

    /** Removes a group's committed offsets of partitions that it does not read; does nothing if that is refused. */
    void forgetOffsets(String group, Set<TopicPartition> partitions);

    @Override
    void close();
}
