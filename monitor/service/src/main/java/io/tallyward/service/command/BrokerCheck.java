package io.tallyward.service.command;

import io.tallyward.service.config.ServiceConfig;
import java.util.ArrayList;
import java.util.HashMap;
import java.util.List;
import java.util.Map;
import java.util.TreeMap;
import java.util.TreeSet;
import java.util.regex.Pattern;

/**
 * What the brokers say about the input topics.
 *
 * @param partitions partitions of each topic, by name
 * @param problems sentences about what is wrong; empty when nothing is
 */
record BrokerCheck(Map<String, Integer> partitions, List<String> problems) {

    /** The brokers were not asked. */
    static final BrokerCheck SKIPPED = new BrokerCheck(Map.of(), List.of());

    /** A person is waiting, so we give up sooner than the service would. */
    private static final String PATIENCE_MILLIS = "5000";

    /** What the client library says of a broker that does not answer; it helps nobody who waits for a sentence. */
    private static final Pattern TIMEOUT = Pattern.compile(" \\(Timed out waiting for a node assignment[^)]*\\)");

    /** Asks the brokers, for ten seconds or so at most. */
    static BrokerCheck of(ServiceConfig config, TopicLookup lookup) {
        List<String> topics = config.input().topics();
        try {
            Map<String, Integer> partitions = new TreeMap<>(lookup.partitions(clientProperties(config), topics));
            return new BrokerCheck(partitions, problems(config, partitions));
        } catch (RuntimeException e) {
            return new BrokerCheck(
                    Map.of(),
                    List.of(TIMEOUT.matcher(String.valueOf(e.getMessage())).replaceFirst("")));
        }
    }

    static Map<String, String> clientProperties(ServiceConfig config) {
        Map<String, String> properties = new HashMap<>();
        properties.put("default.api.timeout.ms", PATIENCE_MILLIS);
        properties.put("request.timeout.ms", PATIENCE_MILLIS);
        properties.putAll(config.kafka().properties());
        properties.put("bootstrap.servers", config.kafka().bootstrapServers());
        return properties;
    }

    private static List<String> problems(ServiceConfig config, Map<String, Integer> partitions) {
        List<String> problems = new ArrayList<>();
        for (String topic : config.input().topics()) {
            if (!partitions.containsKey(topic)) {
                problems.add("input topic " + topic + " does not exist on "
                        + config.kafka().bootstrapServers()
                        + ": create it, or correct input.topics in " + config.file());
            }
        }
        if (new TreeSet<>(partitions.values()).size() > 1) {
            problems.add("input topics have different numbers of partitions " + partitions
                    + " (expected: the same number, so that the events of a unit meet):"
                    + " give them as many partitions, or leave all but one out of input.topics in " + config.file());
        }
        return problems;
    }
}
