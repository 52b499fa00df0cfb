package io.tallyward.service.command;

import io.tallyward.connector.kafka.LogBound;
import java.util.List;
import java.util.Map;
import java.util.function.Consumer;
import org.apache.kafka.clients.consumer.ConsumerRecord;

/** Reads a stretch of the input topics, without side effects. */
@FunctionalInterface
public interface InputReading {

    /**
     * Hands over every committed record between two bounds, in the order of each partition.
     *
     * @param clientProperties properties of the Kafka client, {@code bootstrap.servers} among them
     * @throws RuntimeException when the brokers do not answer or refuse; its message is a sentence for an operator
     */
    void read(
            Map<String, String> clientProperties,
            List<String> topics,
            LogBound from,
            LogBound to,
            Consumer<ConsumerRecord<byte[], byte[]>> records);
}
