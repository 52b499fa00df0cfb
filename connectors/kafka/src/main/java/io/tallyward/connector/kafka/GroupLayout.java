package io.tallyward.connector.kafka;

import java.util.ArrayList;
import java.util.List;
import java.util.Map;

/** How many shards a group has, and whether the topics are such that it can have them. */
final class GroupLayout {

    private GroupLayout() {}

    /**
     * Finds the number of partitions that all input topics share, and makes sure that the group's own topics are there.
     *
     * @throws BrokerException if a topic is missing or if partition counts do not agree
     */
    static int resolve(ShardGroup group, Cluster cluster) {
        List<String> asked = new ArrayList<>(group.inputTopics());
        Map<String, Integer> found = cluster.partitions(asked);
        int partitions = agreed(group, found);
        List<InternalTopic> own = group.internalTopics().apply(partitions);
        new InternalTopics(cluster, group.broker()).ensure(own);
        // A topic just created may not be known to every broker yet, so the group's own need no second look.
        if (own.stream()
                .noneMatch(topic -> topic.name().equals(group.stateTopic()) && topic.partitions() == partitions)) {
            checkState(group, cluster, partitions);
        }
        return partitions;
    }

    private static void checkState(ShardGroup group, Cluster cluster, int partitions) {
        Integer found = cluster.partitions(List.of(group.stateTopic())).get(group.stateTopic());
        if (found == null) {
            throw new BrokerException("state topic " + group.stateTopic() + " does not exist on " + group.broker()
                    + ": create it, compacted, with " + partitions + " partitions");
        }
        if (found != partitions) {
            throw new BrokerException("state topic " + group.stateTopic() + " has " + found + " partitions on "
                    + group.broker() + " (expected: " + partitions + ", as " + group.inputTopics()
                    + "): go back to the earlier partition count of the input, or start under a new name");
        }
    }

    private static int agreed(ShardGroup group, Map<String, Integer> found) {
        for (String topic : group.inputTopics()) {
            if (!found.containsKey(topic)) {
                throw new BrokerException(
                        "input topic " + topic + " does not exist on " + group.broker() + ": " + group.missingInput());
            }
        }
        String first = group.inputTopics().get(0);
        for (String topic : group.inputTopics()) {
            if (!found.get(topic).equals(found.get(first))) {
                throw new BrokerException("input topics differ in their partition counts on " + group.broker() + ": "
                        + first + " has " + found.get(first) + ", " + topic + " has " + found.get(topic)
                        + ": views and clicks of one unit meet only if all input topics have the same count;"
                        + " recreate one of them");
            }
        }
        return found.get(first);
    }
}
