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
        new InternalTopics(cluster, group.broker())
                .ensure(group.internalTopics().apply(partitions));
        Integer statePartitions =
                cluster.partitions(List.of(group.stateTopic())).get(group.stateTopic());
        if (statePartitions == null) {
            throw new BrokerException("state topic " + group.stateTopic() + " does not exist on " + group.broker()
                    + ": create it, compacted, with " + partitions + " partitions");
        }
        if (statePartitions != partitions) {
            throw new BrokerException("state topic " + group.stateTopic() + " has " + statePartitions
                    + " partitions on " + group.broker() + " (expected: " + partitions + ", as " + group.inputTopics()
                    + "): go back to the earlier partition count of the input, or start under a new name");
        }
        return partitions;
    }

    private static int agreed(ShardGroup group, Map<String, Integer> found) {
        for (String topic : group.inputTopics()) {
            if (!found.containsKey(topic)) {
                throw new BrokerException("input topic " + topic + " does not exist on " + group.broker()
                        + ": create it or correct input.topics");
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
