package io.tallyward.connector.kafka;

import org.apache.kafka.common.utils.Utils;

/** Which partition a keyed record goes to under the Java client's default partitioner. */
public final class KeyPartitions {

    private KeyPartitions() {}

    /**
     * The partition of a key: murmur2 modulo the number of partitions, as documented for the default partitioner.
     *
     * @param key the serialised key
     * @param partitions how many partitions the topic has, 1 or more
     */
    public static int partitionOf(byte[] key, int partitions) {
        return Utils.toPositive(Utils.murmur2(key)) % partitions;
    }
}
