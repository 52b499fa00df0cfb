package io.tallyward.service.command;

import java.util.List;
import java.util.Map;

/** Asks the brokers about topics. */
@FunctionalInterface
public interface TopicLookup {

    /**
     * How many partitions each topic has; topics that do not exist are left out. Gives up after a bounded time.
     *
     * @param clientProperties properties of the Kafka client, {@code bootstrap.servers} among them
     * @throws RuntimeException when the brokers do not answer or refuse; its message is a sentence for an operator
     */
    Map<String, Integer> partitions(Map<String, String> clientProperties, List<String> topics);
}
