package io.tallyward.connector.kafka;

import java.util.Map;
import java.util.Objects;

/**
 * What an outbox reader reads.
 *
 * @param group its consumer group, used by nothing else
 * @param topic the topic of notices
 * @param mostPending how many notices may be handed out and not done, 10 to 100,000; reading pauses there
 * @param clientProperties properties of the Kafka client; {@code bootstrap.servers} at least
 */
public record OutboxSource(String group, String topic, int mostPending, Map<String, String> clientProperties) {

    /** Enough for a storm of one notice per experiment, and small in memory: a notice is under 20 kB. */
    public static final int USUAL_MOST_PENDING = 1_000;

    public OutboxSource {
        Objects.requireNonNull(group, "group");
        Objects.requireNonNull(topic, "topic");
        clientProperties = Map.copyOf(clientProperties);
        if (mostPending < 10 || mostPending > 100_000) {
            throw new IllegalArgumentException("mostPending: " + mostPending + " (expected: 10 to 100000)");
        }
        if (clientProperties.getOrDefault("bootstrap.servers", "").isBlank()) {
            throw new IllegalArgumentException("clientProperties: no bootstrap.servers (expected: host:port)");
        }
    }

    /** Where the broker is, for messages. */
    public String broker() {
        return clientProperties.get("bootstrap.servers");
    }

    /** Small enough that one poll never passes the limit by much of it. */
    int mostPerPoll() {
        return Math.min(100, mostPending / 2);
    }

    /** Leaves the client properties out: they may hold credentials. */
    @Override
    public String toString() {
        return "OutboxSource[" + group + " reading " + topic + " at " + broker() + "]";
    }
}
