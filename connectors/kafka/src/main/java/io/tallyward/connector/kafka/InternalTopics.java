package io.tallyward.connector.kafka;

import java.util.List;
import java.util.Map;
import org.apache.kafka.common.KafkaException;

/**
 * Sees to it that the service's own topics exist with the partitions they need. Any number of instances may do so at the
 * same time. An existing topic keeps its settings, which an operator may have changed; only its partition count is
 * checked, because shards find their state by partition number.
 */
public final class InternalTopics {

    private final Cluster cluster;
    private final String broker;

    InternalTopics(Cluster cluster, String broker) {
        this.cluster = cluster;
        this.broker = broker;
    }

    /**
     * Creates what is missing and checks what is there.
     *
     * @param clientProperties properties of the Kafka client, {@code bootstrap.servers} among them
     * @throws BrokerException if the broker does not answer or refuses, or if a topic has another partition count
     */
    public static void ensure(Map<String, String> clientProperties, List<InternalTopic> topics) {
        String broker = clientProperties.get("bootstrap.servers");
        try (Cluster cluster = ClientSettings.cluster(clientProperties)) {
            new InternalTopics(cluster, broker).ensure(topics);
        } catch (KafkaException failure) {
            throw new BrokerException(BrokerSentence.of(failure, broker).text(), failure);
        }
    }

    /**
     * How many partitions each topic has; topics that do not exist are left out.
     *
     * @throws BrokerException if the broker does not answer or refuses
     */
    public static Map<String, Integer> partitions(Map<String, String> clientProperties, List<String> topics) {
        try (Cluster cluster = ClientSettings.cluster(clientProperties)) {
            return Map.copyOf(cluster.partitions(topics));
        } catch (KafkaException failure) {
            throw new BrokerException(
                    BrokerSentence.of(failure, clientProperties.get("bootstrap.servers"))
                            .text(),
                    failure);
        }
    }

    void ensure(List<InternalTopic> topics) {
        Map<String, Integer> found =
                cluster.partitions(topics.stream().map(InternalTopic::name).toList());
        for (InternalTopic topic : topics) {
            Integer partitions = found.get(topic.name());
            if (partitions == null) {
                create(topic);
            } else if (partitions != topic.partitions()) {
                throw new BrokerException("topic " + topic.name() + " has " + partitions + " partitions on " + broker
                        + " (expected: " + topic.partitions()
                        + "): go back to the earlier partition count of the input, or start under a new name");
            }
        }
    }

    private void create(InternalTopic topic) {
        try {
            cluster.create(topic);
        } catch (KafkaException refused) {
            throw new BrokerException(
                    "topic " + topic.name() + " with " + topic.partitions() + " partitions could not be created: "
                            + BrokerSentence.of(refused, broker).text() + "; or create the topic by hand",
                    refused);
        }
    }
}
