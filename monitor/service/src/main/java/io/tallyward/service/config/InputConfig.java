package io.tallyward.service.config;

import io.tallyward.connector.format.EventMapping;
import java.time.Duration;
import java.util.List;

/**
 * What to read and how to understand it.
 *
 * @param topics the input topics, in the order of the file; all have the same number of partitions
 * @param start where to begin in partitions without a committed offset
 * @param mapping where the fields of an event lie in a record, and which texts of the kind field mean which kind
 * @param maxSkew how far an event may lie ahead of its record's timestamp
 * @param idleAfter how much wall-clock time without records makes a partition idle
 * @param maxEventBytes larger records are rejected as oversized
 */
public record InputConfig(
        List<String> topics,
        InputStart start,
        EventMapping mapping,
        Duration maxSkew,
        Duration idleAfter,
        int maxEventBytes) {

    public InputConfig {
        topics = List.copyOf(topics);
    }
}
