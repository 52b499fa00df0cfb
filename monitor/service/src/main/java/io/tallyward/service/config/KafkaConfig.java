package io.tallyward.service.config;

import java.util.Map;

/**
 * How to reach the brokers.
 *
 * @param bootstrapServers host:port pairs separated by commas
 * @param properties further client properties, passed through as they are
 */
public record KafkaConfig(String bootstrapServers, Map<String, String> properties) {

    public KafkaConfig {
        properties = Map.copyOf(properties);
    }

    /** Names the properties without their values, for these may be passwords. */
    @Override
    public String toString() {
        return "KafkaConfig[bootstrapServers=" + bootstrapServers + ", properties="
                + properties.keySet().stream().sorted().toList() + "]";
    }
}
