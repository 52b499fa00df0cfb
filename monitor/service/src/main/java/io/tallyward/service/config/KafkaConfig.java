package io.tallyward.service.config;

import io.tallyward.connector.kafka.GroupProtocol;
import java.util.Map;
import java.util.Optional;

/**
 * How to reach the brokers.
 *
 * @param bootstrapServers host:port pairs separated by commas
 * @param groupProtocol how instances share the partitions
 * @param instance a name that this instance keeps when it is started again, if it has one
 * @param properties further client properties, passed through as they are
 */
public record KafkaConfig(
        String bootstrapServers,
        GroupProtocol groupProtocol,
        Optional<String> instance,
        Map<String, String> properties) {

    public KafkaConfig {
        properties = Map.copyOf(properties);
    }

    /** Names the properties without their values, for these may be passwords. */
    @Override
    public String toString() {
        return "KafkaConfig[bootstrapServers=" + bootstrapServers + ", groupProtocol=" + groupProtocol + ", instance="
                + instance + ", properties="
                + properties.keySet().stream().sorted().toList() + "]";
    }
}
