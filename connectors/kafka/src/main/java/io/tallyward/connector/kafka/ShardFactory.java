package io.tallyward.connector.kafka;

/** Makes empty shards; called by several threads, and again for the same partition whenever it comes (back) to a worker. */
@FunctionalInterface
public interface ShardFactory {

    /**
     * Makes the shard of one partition number.
     *
     * @param partition from 0 to {@code partitions - 1}; the same number in every input topic
     * @param partitions how many partitions every input topic has
     */
    HostedShard create(int partition, int partitions);
}
