package io.tallyward.connector.kafka;

import java.time.Duration;
import java.util.ArrayList;
import java.util.Collection;
import java.util.HashMap;
import java.util.List;
import java.util.Map;
import java.util.Optional;
import java.util.Set;
import java.util.concurrent.ExecutionException;
import java.util.function.Function;
import java.util.stream.Collectors;
import org.apache.kafka.clients.admin.AbortTransactionSpec;
import org.apache.kafka.clients.admin.Admin;
import org.apache.kafka.clients.admin.DescribeProducersResult;
import org.apache.kafka.clients.admin.FinalizedVersionRange;
import org.apache.kafka.clients.admin.ListOffsetsOptions;
import org.apache.kafka.clients.admin.ListTransactionsOptions;
import org.apache.kafka.clients.admin.MemberDescription;
import org.apache.kafka.clients.admin.NewTopic;
import org.apache.kafka.clients.admin.OffsetSpec;
import org.apache.kafka.clients.admin.ProducerState;
import org.apache.kafka.clients.admin.TopicDescription;
import org.apache.kafka.clients.admin.TransactionDescription;
import org.apache.kafka.clients.admin.TransactionListing;
import org.apache.kafka.clients.admin.TransactionState;
import org.apache.kafka.common.IsolationLevel;
import org.apache.kafka.common.KafkaException;
import org.apache.kafka.common.KafkaFuture;
import org.apache.kafka.common.TopicPartition;
import org.apache.kafka.common.Uuid;
import org.apache.kafka.common.errors.ApiException;
import org.apache.kafka.common.errors.AuthorizationException;
import org.apache.kafka.common.errors.InterruptException;
import org.apache.kafka.common.errors.TopicExistsException;
import org.apache.kafka.common.errors.TransactionalIdNotFoundException;
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
        return described(topics, topic -> topic.partitions().size());
    }

    @Override
    public Map<String, String> ids(Collection<String> topics) {
        Map<String, String> ids = described(topics, topic -> topic.topicId().toString());
        ids.values().removeIf(Uuid.ZERO_UUID.toString()::equals);
        return ids;
    }

    private <T> Map<String, T> described(Collection<String> topics, Function<TopicDescription, T> question) {
        Map<String, T> found = new HashMap<>();
        Map<String, KafkaFuture<TopicDescription>> answers =
                admin.describeTopics(topics).topicNameValues();
        answers.forEach((topic, answer) -> {
            try {
                found.put(topic, question.apply(answered(answer)));
            } catch (UnknownTopicOrPartitionException missing) {
                // left out, as promised
            }
        });
        return found;
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
    public List<OpenTransaction> openTransactions(Collection<TopicPartition> partitions) {
        DescribeProducersResult answers = admin.describeProducers(partitions);
        List<OpenTransaction> open = new ArrayList<>();
        for (TopicPartition partition : partitions) {
            try {
                for (ProducerState producer :
                        answered(answers.partitionResult(partition)).activeProducers()) {
                    producer.currentTransactionStartOffset()
                            .ifPresent(start -> open.add(new OpenTransaction(
                                    partition,
                                    producer.producerId(),
                                    producer.producerEpoch(),
                                    producer.coordinatorEpoch().orElse(-1),
                                    start)));
                }
            } catch (AuthorizationException | UnknownTopicOrPartitionException unanswered) {
                // left out, as promised
            }
        }
        return open;
    }

    @Override
    public Optional<CoordinatedTransaction> coordinated(long producerId) {
        ListTransactionsOptions ofProducer = new ListTransactionsOptions().filterProducerIds(Set.of(producerId));
        return answered(admin.listTransactions(ofProducer).all()).stream()
                .findFirst()
                .flatMap(listing -> coordinated(listing.transactionalId()));
    }

    @Override
    public Optional<CoordinatedTransaction> coordinated(String transactionalId) {
        try {
            TransactionDescription found = answered(
                    admin.describeTransactions(List.of(transactionalId)).description(transactionalId));
            return Optional.of(new CoordinatedTransaction(
                    transactionalId, found.state(), found.producerId(), found.producerEpoch()));
        } catch (TransactionalIdNotFoundException unknown) {
            return Optional.empty();
        }
    }

    @Override
    public List<String> ongoingTransactions() {
        ListTransactionsOptions ongoing = new ListTransactionsOptions().filterStates(Set.of(TransactionState.ONGOING));
        return answered(admin.listTransactions(ongoing).all()).stream()
                .map(TransactionListing::transactionalId)
                .toList();
    }

    @Override
    public boolean numbersTransactions() {
        FinalizedVersionRange version = answered(admin.describeFeatures().featureMetadata())
                .finalizedFeatures()
                .get("transaction.version");
        return version != null && version.maxVersionLevel() >= 2;
    }

    @Override
    public void abort(OpenTransaction transaction) {
        answered(admin.abortTransaction(new AbortTransactionSpec(
                        transaction.partition(),
                        transaction.producerId(),
                        (short) transaction.epoch(),
                        Math.max(0, transaction.coordinatorEpoch())))
                .all());
    }

    @Override
    public Set<String> memberClientIds(String group) {
        return answered(admin.describeConsumerGroups(List.of(group))
                        .describedGroups()
                        .get(group))
                .members()
                .stream()
                .map(MemberDescription::clientId)
                .collect(Collectors.toUnmodifiableSet());
    }

    @Override
    public void forgetOffsets(String group, Set<TopicPartition> partitions) {
        try {
            answered(admin.deleteConsumerGroupOffsets(group, partitions).all());
        } catch (ApiException refused) {
            // they say nothing and do no harm
        }
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
