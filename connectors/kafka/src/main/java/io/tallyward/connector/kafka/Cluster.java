package io.tallyward.connector.kafka;

import java.util.Collection;
import java.util.Map;
import org.apache.kafka.common.TopicPartition;

/** What has to be asked of the brokers beside reading and writing. Every question is bounded in time. */
interface Cluster extends AutoCloseable {

    /** How many partitions each topic has; topics that do not exist are left out. */
    Map<String, Integer> partitions(Collection<String> topics);

    /** Creates a topic; one that exists already is left alone. */
    void create(InternalTopic topic);

    /** The high watermark: behind everything written, finished transaction or not. */
    long endOffset(TopicPartition partition);

    /** Returns if a broker answers. */
    void ping();

    @Override
    void close();
}
