package io.tallyward.connector.kafka;

import java.util.Map;
import java.util.Set;

/**
 * How a group agrees on who reads which partition. Both give partition n of every input topic to one member, by range. All
 * instances of a group use the same one; it can be changed while the group is empty.
 */
public enum GroupProtocol {
    /**
     * A member of the group works out who reads what, and all of them let go and take up again together. Every broker
     * speaks it.
     */
    CLASSIC(
            Map.of(
                    "group.protocol",
                    "classic",
                    "partition.assignment.strategy",
                    "org.apache.kafka.clients.consumer.RangeAssignor"),
            Set.of()),

    /**
     * The broker works it out and moves single partitions, while the others are read on (KIP-848). Needs brokers of version
     * 4.0 or later, which also set the session timeout ({@code group.consumer.session.timeout.ms}).
     */
    CONSUMER(
            Map.of("group.protocol", "consumer", "group.remote.assignor", "range"),
            Set.of("partition.assignment.strategy", "session.timeout.ms", "heartbeat.interval.ms"));

    private final Map<String, String> settings;
    private final Set<String> refused;

    GroupProtocol(Map<String, String> settings, Set<String> refused) {
        this.settings = settings;
        this.refused = refused;
    }

    /** The properties that choose it. */
    Map<String, String> settings() {
        return settings;
    }

    /** The properties that a consumer under it does not accept. */
    Set<String> refused() {
        return refused;
    }
}
