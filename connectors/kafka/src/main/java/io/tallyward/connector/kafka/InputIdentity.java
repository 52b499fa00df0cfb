package io.tallyward.connector.kafka;

import java.util.Map;
import org.apache.kafka.clients.consumer.OffsetAndMetadata;
import org.apache.kafka.common.TopicPartition;

/**
 * Which input topics the group reads: those of these names, and none that was created later under the same name. The
 * brokers give every topic an identity at its creation; it is committed along with each offset, so that offsets and counts
 * of a topic that is gone are not taken for those of its successor.
 */
final class InputIdentity {

    private static final String LABEL = "topic ";

    private final ShardGroup group;
    private final Cluster cluster;
    private final int partitions;
    private final Map<String, String> ids;

    /** Asks for the topics as they are now. */
    InputIdentity(ShardGroup group, Cluster cluster, int partitions) {
        this.group = group;
        this.cluster = cluster;
        this.partitions = partitions;
        this.ids = cluster.ids(group.inputTopics());
    }

    /** An offset as it is to be committed. */
    OffsetAndMetadata offset(TopicPartition input, long offset) {
        String id = ids.get(input.topic());
        return new OffsetAndMetadata(offset, id == null ? "" : LABEL + id);
    }

    /**
     * Takes a committed offset for one of the topic as it is now, unless it says otherwise.
     *
     * @throws BrokerException if it was committed for an earlier topic of the same name
     */
    void check(TopicPartition input, OffsetAndMetadata committed) {
        String id = ids.get(input.topic());
        String found = committed.metadata();
        if (id != null && found != null && found.startsWith(LABEL) && !found.equals(LABEL + id)) {
            throw new BrokerException("input topic " + input.topic() + " on " + group.broker()
                    + " was deleted and created anew since " + group.id()
                    + " last read it, so that what was counted and"
                    + " what is there do not belong together: start under a new name to count it from the beginning; or,"
                    + " to add the new topic to the counts of the old, stop all instances and run kafka-consumer-groups.sh"
                    + " --bootstrap-server " + group.broker() + " --group " + group.id() + " --topic " + input.topic()
                    + " --reset-offsets --to-earliest --execute");
        }
    }

    /**
     * The topics as they are at some moment.
     *
     * @param partitions how many partitions those have that there are
     * @param ids what tells them from earlier ones
     */
    record Found(Map<String, Integer> partitions, Map<String, String> ids) {}

    /** Asks for the topics as they are now; may be called by any thread. */
    Found find() {
        return new Found(cluster.partitions(group.inputTopics()), cluster.ids(group.inputTopics()));
    }

    /**
     * Makes sure that the topics are still what they were.
     *
     * @throws BrokerException if one is gone, has grown or was created anew
     */
    void verify(Found found) {
        Map<String, String> now = found.ids();
        for (String topic : group.inputTopics()) {
            Integer count = found.partitions().get(topic);
            if (count == null) {
                throw new BrokerException("input topic " + topic + " does not exist any more on " + group.broker()
                        + ": " + group.missingInput());
            }
            if (count != partitions) {
                throw new BrokerException("input topic " + topic + " has " + count + " partitions on " + group.broker()
                        + " by now (expected: " + partitions + ", as when counting began): see what follows");
            }
            if (ids.containsKey(topic)
                    && now.containsKey(topic)
                    && !ids.get(topic).equals(now.get(topic))) {
                throw new BrokerException("input topic " + topic + " was created anew on " + group.broker()
                        + " while it was read: see what follows");
            }
        }
    }
}
