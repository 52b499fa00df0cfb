package io.tallyward.connector.kafka;

import java.time.Duration;
import java.util.Collection;
import java.util.HashMap;
import java.util.List;
import java.util.Map;
import java.util.Optional;
import java.util.concurrent.ExecutionException;
import org.apache.kafka.clients.admin.Admin;
import org.apache.kafka.clients.admin.ListOffsetsOptions;
import org.apache.kafka.clients.admin.NewTopic;
import org.apache.kafka.clients.admin.OffsetSpec;
import org.apache.kafka.clients.admin.TopicDescription;
import org.apache.kafka.common.IsolationLevel;
import org.apache.kafka.common.KafkaException;
import org.apache.kafka.common.KafkaFuture;
import org.apache.kafka.common.TopicPartition;
import org.apache.kafka.common.errors.InterruptException;
import org.apache.kafka.common.errors.TopicExistsException;
import org.apache.kafka.common.errors.UnknownTopicOrPartitionException;

/** The brokers, asked through the administration client. */
final class AdminCluster implements Cluster {

    private static final Duration CLOSE_PATIENCE = Duration.ofSeconds(1);

    private final Admin admin;

    AdminCluster(Admin admin) {
        this.admin = admin;
    }

    @Override
    public Map<String, Integer> partitions(Collection<String> topics) {
        Map<String, Integer> counts = new HashMap<>();
        Map<String, KafkaFuture<TopicDescription>> answers =
                admin.describeTopics(topics).topicNameValues();
        answers.forEach((topic, answer) -> {
            try {
                counts.put(topic, answered(answer).partitions().size());
            } catch (UnknownTopicOrPartitionException missing) {
                // left out, as promised
            }
        });
        return counts;
    }

    @Override
    public void create(InternalTopic topic) {
        NewTopic wanted = new NewTopic(topic.name(), Optional.of(topic.partitions()), Optional.empty());
        try {
            answered(admin.createTopics(List.of(wanted.configs(topic.settings())))
                    .all());
        } catch (TopicExistsException another) {
            // another instance was quicker
        }
    }

    @Override
    public long endOffset(TopicPartition partition) {
        ListOffsetsOptions everything = new ListOffsetsOptions(IsolationLevel.READ_UNCOMMITTED);
        return answered(admin.listOffsets(Map.of(partition, OffsetSpec.latest()), everything)
                        .partitionResult(partition))
                .offset();
    }

    @Override
    public void ping() {
        answered(admin.describeCluster().clusterId());
    }

    @Override
    public void close() {
        admin.close(CLOSE_PATIENCE);
    }

    private static <T> T answered(KafkaFuture<T> answer) {
        try {
            return answer.get();
        } catch (ExecutionException failure) {
            if (failure.getCause() instanceof KafkaException refused) {
                throw refused;
            }
            throw new KafkaException(failure.getCause());
        } catch (InterruptedException interrupted) {
            throw new InterruptException(interrupted);
        }
    }
}
