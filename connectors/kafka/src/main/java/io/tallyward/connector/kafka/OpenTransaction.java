package io.tallyward.connector.kafka;

import org.apache.kafka.common.TopicPartition;

/**
 * A transaction without an end in one partition.
 *
 * @param partition where it is open
 * @param producerId the producer's number
 * @param epoch the producer's epoch when it last wrote there
 * @param coordinatorEpoch epoch of the coordinator that last ended a transaction of it there; -1 if none has
 * @param startOffset its first record there
 */
record OpenTransaction(TopicPartition partition, long producerId, int epoch, int coordinatorEpoch, long startOffset) {

    /** The command that aborts it in this partition, whatever its coordinator knows of it. */
    String abortCommand(String broker) {
        return "kafka-transactions.sh --bootstrap-server " + broker + " abort --topic " + partition.topic()
                + " --partition " + partition.partition() + " --start-offset " + startOffset;
    }
}
