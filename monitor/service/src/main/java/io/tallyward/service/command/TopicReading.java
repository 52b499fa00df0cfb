package io.tallyward.service.command;

import java.util.Map;
import java.util.function.Consumer;

/** Reads a topic from its beginning to its present end. */
@FunctionalInterface
public interface TopicReading {

    /**
     * Hands over the value of every committed record, in the order of each partition.
     *
     * @param clientProperties properties of the Kafka client, {@code bootstrap.servers} among them
     * @throws RuntimeException when the brokers do not answer or refuse; its message is a sentence for an operator
     */
    void read(Map<String, String> clientProperties, String topic, Consumer<byte[]> values);
}
