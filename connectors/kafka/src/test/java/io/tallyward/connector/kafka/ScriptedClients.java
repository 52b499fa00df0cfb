package io.tallyward.connector.kafka;

import java.time.Duration;
import java.util.ArrayList;
import java.util.Collection;
import java.util.HashMap;
import java.util.HashSet;
import java.util.List;
import java.util.Map;
import java.util.Optional;
import java.util.Set;
import java.util.concurrent.Executor;
import java.util.concurrent.Future;
import org.apache.kafka.clients.admin.TransactionState;
import org.apache.kafka.clients.consumer.Consumer;
import org.apache.kafka.clients.consumer.ConsumerGroupMetadata;
import org.apache.kafka.clients.consumer.ConsumerRecord;
import org.apache.kafka.clients.consumer.ConsumerRecords;
import org.apache.kafka.clients.consumer.MockConsumer;
import org.apache.kafka.clients.consumer.OffsetAndMetadata;
import org.apache.kafka.clients.consumer.OffsetAndTimestamp;
import org.apache.kafka.clients.producer.MockProducer;
import org.apache.kafka.clients.producer.Producer;
import org.apache.kafka.clients.producer.ProducerRecord;
import org.apache.kafka.clients.producer.RecordMetadata;
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

    /** Where the state of some partitions ends, if it is not where the scripted records end. */
    final Map<Integer, Long> stateEnds = new HashMap<>();

    /** The first record that is not before any time; null if there is none. */
    Long timedOffset;

    /** What setting up the next producer ends in; null for a producer. */
    RuntimeException initFailure;

    /** What the next questions for committed offsets and for a sign of life end in; null for an answer. */
    RuntimeException committedFailure;

    RuntimeException pingFailure;

    /** What asking which topics there are ends in; null for an answer. */
    RuntimeException idsFailure;

    /** What asking for ongoing transactions ends in; null for an answer. */
    RuntimeException ongoingFailure;

    /** What the brokers say of transactions. */
    final List<OpenTransaction> open = new ArrayList<>();

    final Map<Long, CoordinatedTransaction> coordinated = new HashMap<>();
    final Set<String> members = new HashSet<>();
    final Map<String, String> ids = new HashMap<>();
    boolean numbered = true;

    /** Whether questions that are put aside wait until the test has them answered. */
    boolean brokersHesitate;

    final List<Runnable> aside = new ArrayList<>();

    /** What happens while a worker proves that it is a member. */
    Runnable onProof = () -> {};

    @Override
    public Cluster cluster() {
        return new ScriptedCluster();
    }

    @Override
    public Executor aside() {
        return task -> {
            if (brokersHesitate) {
                aside.add(task);
            } else {
                task.run();
            }
        };
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
                        if (initFailure != null) {
                            RuntimeException failure = initFailure;
                            initFailure = null;
                            throw failure;
                        }
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
    public Optional<String> lastTransactionalId() {
        return producers.isEmpty() ? Optional.empty() : Optional.of("counters-blue-0-" + producers.size());
    }

    @Override
    public boolean isPredecessor(String transactionalId) {
        return transactionalId.startsWith("counters-earlier-");
    }

    @Override
    public Producer<byte[], byte[]> standIn(String transactionalId) {
        return new MockProducer<>(true, null, new ByteArraySerializer(), new ByteArraySerializer()) {
            @Override
            public void initTransactions() {
                journal.add("take over " + transactionalId);
                super.initTransactions();
            }

            @Override
            public synchronized Future<RecordMetadata> send(ProducerRecord<byte[], byte[]> record) {
                journal.add("fill " + record.topic() + "-" + record.partition());
                return super.send(record);
            }

            @Override
            public void sendOffsetsToTransaction(
                    Map<TopicPartition, OffsetAndMetadata> offsets, ConsumerGroupMetadata member) {
                journal.add("fill offsets");
                super.sendOffsetsToTransaction(offsets, member);
            }

            @Override
            public void commitTransaction() {
                super.commitTransaction();
                journal.add("commit " + transactionalId);
            }
        };
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
            if (offsets.keySet().stream()
                    .anyMatch(partition -> partition.topic().equals("states"))) {
                journal.add("prove membership");
                onProof.run();
                return;
            }
            committed.putAll(offsets);
            super.commitSync(offsets, timeout);
        }

        @Override
        public synchronized Map<TopicPartition, OffsetAndTimestamp> offsetsForTimes(Map<TopicPartition, Long> times) {
            Map<TopicPartition, OffsetAndTimestamp> found = new HashMap<>();
            times.forEach((partition, millis) ->
                    found.put(partition, timedOffset == null ? null : new OffsetAndTimestamp(timedOffset, millis)));
            return found;
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
        private boolean read;

        private State() {
            super("earliest");
        }

        @Override
        public synchronized void assign(Collection<TopicPartition> partitions) {
            journal.add("read state");
            super.assign(partitions);
            partitions.forEach(partition -> updateBeginningOffsets(Map.of(partition, 0L)));
            fill();
        }

        private void fill() {
            read = false;
            stateRecords.stream()
                    .filter(record -> assignment().contains(new TopicPartition(record.topic(), record.partition())))
                    .forEach(this::addRecord);
        }

        @Override
        public synchronized ConsumerRecords<byte[], byte[]> poll(Duration timeout) {
            read = true;
            return super.poll(timeout);
        }

        /** What was read is there again for whoever goes back. */
        @Override
        public synchronized void seek(TopicPartition partition, long offset) {
            super.seek(partition, offset);
            if (read) {
                fill();
            }
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
            return stateEnds.getOrDefault(partition.partition(), stateEnd);
        }

        @Override
        public Map<String, String> ids(Collection<String> names) {
            if (idsFailure != null) {
                throw idsFailure;
            }
            Map<String, String> found = new HashMap<>(ids);
            found.keySet().retainAll(names);
            return found;
        }

        @Override
        public List<OpenTransaction> openTransactions(Collection<TopicPartition> partitions) {
            return open.stream()
                    .filter(transaction -> partitions.contains(transaction.partition()))
                    .toList();
        }

        @Override
        public Optional<CoordinatedTransaction> coordinated(long producerId) {
            return Optional.ofNullable(coordinated.get(producerId));
        }

        @Override
        public Optional<CoordinatedTransaction> coordinated(String transactionalId) {
            return coordinated.values().stream()
                    .filter(known -> known.transactionalId().equals(transactionalId))
                    .findFirst();
        }

        @Override
        public List<String> ongoingTransactions() {
            if (ongoingFailure != null) {
                throw ongoingFailure;
            }
            return coordinated.values().stream()
                    .filter(known -> known.state() == TransactionState.ONGOING)
                    .map(CoordinatedTransaction::transactionalId)
                    .toList();
        }

        @Override
        public boolean numbersTransactions() {
            return numbered;
        }

        @Override
        public void abort(OpenTransaction transaction) {
            journal.add("abort in " + transaction.partition());
        }

        @Override
        public Set<String> memberClientIds(String group) {
            return members;
        }

        @Override
        public void forgetOffsets(String group, Set<TopicPartition> partitions) {
            journal.add("forget offsets of " + partitions);
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
