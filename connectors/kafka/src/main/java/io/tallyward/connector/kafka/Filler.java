package io.tallyward.connector.kafka;

import java.nio.charset.StandardCharsets;
import java.util.Arrays;
import org.apache.kafka.clients.consumer.ConsumerRecord;
import org.apache.kafka.clients.producer.ProducerRecord;
import org.apache.kafka.common.TopicPartition;

/**
 * A record that says nothing. It is written to a partition only so that a transaction reaches that partition, and is skipped
 * by every reader of the service's own topics. See {@link TransactionMender}.
 */
public final class Filler {

    private static final byte[] KEY = "tallyward-filler".getBytes(StandardCharsets.US_ASCII);

    private Filler() {}

    static ProducerRecord<byte[], byte[]> to(TopicPartition partition) {
        return new ProducerRecord<>(partition.topic(), partition.partition(), KEY.clone(), null);
    }

    /** Whether a record of one of the service's own topics says nothing. */
    public static boolean is(ConsumerRecord<byte[], byte[]> record) {
        return record.value() == null && Arrays.equals(record.key(), KEY);
    }
}
