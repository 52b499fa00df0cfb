package io.tallyward.connector.kafka;

import java.time.Duration;
import java.util.ArrayList;
import java.util.Collection;
import java.util.HashMap;
import java.util.List;
import java.util.Map;
import java.util.Optional;
import java.util.Set;
import org.apache.kafka.clients.consumer.Consumer;
import org.apache.kafka.clients.consumer.ConsumerRecord;
import org.apache.kafka.clients.consumer.MockConsumer;
import org.apache.kafka.clients.consumer.OffsetAndMetadata;
import org.apache.kafka.clients.producer.MockProducer;
import org.apache.kafka.clients.producer.Producer;
import org.apache.kafka.common.TopicPartition;
import org.apache.kafka.common.serialization.ByteArraySerializer;

/** Clients without a broker, which write down what is asked of them, in order. */
final class ScriptedClients implements Clients, OutboxClients {

    final List<String> journal = new ArrayList<>();
    final Map<String, Integer> topics = new HashMap<>();
    final Map<TopicPartition, OffsetAndMetadata> committed = new HashMap<>();
    final List<ConsumerRecord<byte[], byte[]>> stateRecords = new ArrayList<>();
    final List<MockProducer<byte[], byte[]>> producers = new ArrayList<>();
    final Input input = new Input();
    long stateEnd;

    /** What the next questions for committed offsets and for a sign of life end in; null for an answer. */
    RuntimeException committedFailure;

    RuntimeException pingFailure;

    @Override
    public Cluster cluster() {
        return new ScriptedCluster();
    }

    @Override
    public MockConsumer<byte[], byte[]> input() {
        return input;
    }

    @Override
    public Consumer<byte[], byte[]> notices() {
        return input;
    }

    @Override
    public Consumer<byte[], byte[]> state() {
        return new State();
    }

    @Override
    public Producer<byte[], byte[]> output() {
        MockProducer<byte[], byte[]> producer =
                new MockProducer<>(true, null, new ByteArraySerializer(), new ByteArraySerializer()) {
                    @Override
                    public void initTransactions() {
                        journal.add("init transactions");
                        super.initTransactions();
                    }

                    @Override
                    public void commitTransaction() {
                        super.commitTransaction();
                        journal.add("commit transaction");
                    }
                };
        producers.add(producer);
        return producer;
    }

    @Override
    public Optional<Producer<byte[], byte[]>> predecessor() {
        return producers.isEmpty()
                ? Optional.empty()
                : Optional.of(new MockProducer<>(true, null, new ByteArraySerializer(), new ByteArraySerializer()) {
                    @Override
                    public void initTransactions() {
                        journal.add("end what was left open");
                        super.initTransactions();
                    }
                });
    }

    MockProducer<byte[], byte[]> producer() {
        return producers.get(producers.size() - 1);
    }

    void input(String topic, int partition, long offset, String key, String value) {
        input.addRecord(new ConsumerRecord<>(
                topic, partition, offset, CountingShard.bytes(key), value == null ? null : CountingShard.bytes(value)));
    }

    void state(String topic, int partition, long offset, String key, String value) {
        stateRecords.add(
                new ConsumerRecord<>(topic, partition, offset, CountingShard.bytes(key), CountingShard.bytes(value)));
        stateEnd = offset + 1;
    }

    /** The group's consumer. What it answers for committed offsets is scripted. */
    final class Input extends MockConsumer<byte[], byte[]> {
        private Input() {
            super("none");
        }

        @Override
        public synchronized Map<TopicPartition, OffsetAndMetadata> committed(
                Set<TopicPartition> partitions, Duration timeout) {
            journal.add("read committed offsets");
            if (committedFailure != null) {
                throw committedFailure;
            }
            Map<TopicPartition, OffsetAndMetadata> answer = new HashMap<>();
            partitions.forEach(partition -> answer.put(partition, committed.get(partition)));
            return answer;
        }

        @Override
        public void commitSync(Map<TopicPartition, OffsetAndMetadata> offsets, Duration timeout) {
            committed.putAll(offsets);
            super.commitSync(offsets, timeout);
        }

        @Override
        public synchronized void seek(TopicPartition partition, long offset) {
            journal.add("seek " + partition + " to " + offset);
            super.seek(partition, offset);
        }

        @Override
        public synchronized void pause(Collection<TopicPartition> partitions) {
            journal.add("pause " + partitions.size());
            super.pause(partitions);
        }

        @Override
        public synchronized void resume(Collection<TopicPartition> partitions) {
            journal.add("resume " + partitions.size());
            super.resume(partitions);
        }
    }

    /** The reader of state: whatever partition it is given holds the scripted records. */
    private final class State extends MockConsumer<byte[], byte[]> {
        private State() {
            super("earliest");
        }

        @Override
        public synchronized void assign(Collection<TopicPartition> partitions) {
            journal.add("read state");
            super.assign(partitions);
            partitions.forEach(partition -> updateBeginningOffsets(Map.of(partition, 0L)));
            stateRecords.stream()
                    .filter(record -> partitions.contains(new TopicPartition(record.topic(), record.partition())))
                    .forEach(this::addRecord);
        }
    }

    private final class ScriptedCluster implements Cluster {
        @Override
        public Map<String, Integer> partitions(Collection<String> names) {
            Map<String, Integer> found = new HashMap<>(topics);
            found.keySet().retainAll(names);
            return found;
        }

        @Override
        public void create(InternalTopic topic) {
            journal.add("create " + topic.name());
            topics.put(topic.name(), topic.partitions());
        }

        @Override
        public long endOffset(TopicPartition partition) {
            journal.add("ask for the end of the state");
            return stateEnd;
        }

        @Override
        public void ping() {
            journal.add("ping");
            if (pingFailure != null) {
                throw pingFailure;
            }
        }

        @Override
        public void close() {
            journal.add("close cluster");
        }
    }
}
