package io.tallyward.demo.bench;

import com.fasterxml.jackson.databind.JsonNode;
import java.util.Map;
import java.util.TreeMap;

/** Reads from what a monitor says about its partitions how many events each has counted. */
final class CountedEvents {

    private CountedEvents() {}

    /** Events of a partition that are accounted for, with whatever outcome, rejected and open ones included. */
    static long in(JsonNode partition) {
        long events = sum(partition.path("rejected"));
        for (JsonNode experiment : partition.path("experiments")) {
            events += experiment.path("open").asLong() + sum(experiment.path("outcomes"));
        }
        return events;
    }

    /** The same of all partitions together. */
    static long in(Map<Integer, JsonNode> partitions) {
        return partitions.values().stream().mapToLong(CountedEvents::in).sum();
    }

    /** Units in the ledgers of all partitions. */
    static long units(Map<Integer, JsonNode> partitions) {
        return partitions.values().stream()
                .mapToLong(partition -> partition.path("ledgerUnits").asLong())
                .sum();
    }

    /** Events by outcome of all experiments and partitions, the open and the rejected ones under these words. */
    static Map<String, Long> byOutcome(Map<Integer, JsonNode> partitions) {
        Map<String, Long> all = new TreeMap<>();
        for (JsonNode partition : partitions.values()) {
            all.merge("rejected", sum(partition.path("rejected")), Long::sum);
            for (JsonNode experiment : partition.path("experiments")) {
                all.merge("open", experiment.path("open").asLong(), Long::sum);
                experiment
                        .path("outcomes")
                        .properties()
                        .forEach(outcome ->
                                all.merge(outcome.getKey(), outcome.getValue().asLong(), Long::sum));
            }
        }
        return all;
    }

    private static long sum(JsonNode numbers) {
        long sum = 0;
        for (JsonNode number : numbers) {
            sum += number.asLong();
        }
        return sum;
    }
}
