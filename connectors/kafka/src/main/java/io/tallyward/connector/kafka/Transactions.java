package io.tallyward.connector.kafka;

import java.time.Duration;
import java.util.List;
import java.util.Map;
import java.util.Optional;
import org.apache.kafka.clients.consumer.ConsumerGroupMetadata;
import org.apache.kafka.clients.consumer.OffsetAndMetadata;
import org.apache.kafka.clients.producer.Producer;
import org.apache.kafka.clients.producer.ProducerRecord;
import org.apache.kafka.common.KafkaException;
import org.apache.kafka.common.TopicPartition;
import org.apache.kafka.common.errors.InterruptException;
import org.apache.kafka.common.errors.RecordTooLargeException;
import org.apache.kafka.common.errors.TimeoutException;

/**
 * One worker's transactions: outputs and offsets together or not at all. After a failure the producer is thrown away.
 * Before the next is made, whatever it left open is ended under its transactional id; that id is then never used again,
 * since a broker that has failed to end a transaction in some partition would commit it there with the next one of the
 * same id.
 */
final class Transactions implements AutoCloseable {

    private static final Duration CLOSE_PATIENCE = Duration.ofSeconds(1);

    private final Clients clients;
    private final Cluster cluster;
    private Producer<byte[], byte[]> producer;

    Transactions(Clients clients, Cluster cluster) {
        this.clients = clients;
        this.cluster = cluster;
    }

    /** Makes a producer if there is none, and waits until no earlier transaction of this worker is open. */
    void ready() {
        if (producer != null) {
            return;
        }
        clients.lastTransactionalId().ifPresentOrElse(this::endWhatIsOpen, this::endOfPredecessors);
        Producer<byte[], byte[]> fresh = clients.output();
        begin(fresh);
        producer = fresh;
    }

    /**
     * Ends the last transaction, unless its coordinator has ended it already. In that case the id is left alone: taking it
     * over would wipe out how it ended, which {@link OwedMarker} may have to know.
     */
    private void endWhatIsOpen(String transactionalId) {
        Optional<CoordinatedTransaction> last = cluster.coordinated(transactionalId);
        if (last.isEmpty() || last.get().ended()) {
            return;
        }
        if (last.get().ending()) {
            throw new BrokerException("the last transaction of " + transactionalId
                    + " is being ended by its coordinator, which takes moments: if this stays, see the broker's log");
        }
        Producer<byte[], byte[]> standIn = clients.standIn(transactionalId);
        begin(standIn);
        standIn.close(CLOSE_PATIENCE);
    }

    /**
     * Ends what an instance left open that was killed and whose name this one keeps, instead of waiting until it times out:
     * until then neither offsets nor state can be read. Where it cannot be found, it is waited for.
     */
    private void endOfPredecessors() {
        List<String> ongoing;
        try {
            ongoing = cluster.ongoingTransactions();
        } catch (InterruptException stop) {
            throw stop;
        } catch (KafkaException unanswered) {
            return;
        }
        ongoing.stream().filter(clients::isPredecessor).forEach(this::endWhatIsOpen);
    }

    /** Puts the producer aside, between two transactions; the next will have an id of its own. */
    void retire() {
        close();
    }

    /** Takes a transactional id over, which ends an open transaction under it. */
    private static void begin(Producer<byte[], byte[]> fresh) {
        try {
            fresh.initTransactions();
        } catch (RuntimeException failure) {
            fresh.close(Duration.ZERO);
            throw failure;
        }
    }

    /**
     * Commits. The offsets always go along, even if none has moved: they are what fences a member that the group has left
     * behind.
     */
    void commit(List<Output> outputs, Map<TopicPartition, OffsetAndMetadata> offsets, ConsumerGroupMetadata member) {
        ready();
        try {
            producer.beginTransaction();
            for (Output output : outputs) {
                producer.send(record(output));
            }
            producer.sendOffsetsToTransaction(offsets, member);
            producer.commitTransaction();
        } catch (RuntimeException failure) {
            discard(failure);
            RecordTooLargeException tooLarge = BrokerSentence.find(failure, RecordTooLargeException.class);
            if (tooLarge != null) {
                throw new ShardFailure("a shard broke its promise to keep records small", tooLarge);
            }
            throw failure;
        }
    }

    /** Throws the producer away; an open transaction is aborted now if that is possible, else when the next is ready. */
    private void discard(RuntimeException failure) {
        Producer<byte[], byte[]> broken = producer;
        producer = null;
        if (broken == null) {
            return;
        }
        try {
            if (BrokerSentence.find(failure, TimeoutException.class) == null) {
                broken.abortTransaction();
            }
        } catch (KafkaException | IllegalStateException alsoFailed) {
            failure.addSuppressed(alsoFailed);
        } finally {
            broken.close(Duration.ZERO);
        }
    }

    @Override
    public void close() {
        if (producer != null) {
            producer.close(CLOSE_PATIENCE);
            producer = null;
        }
    }

    private static ProducerRecord<byte[], byte[]> record(Output output) {
        ProducerRecord<byte[], byte[]> record =
                new ProducerRecord<>(output.topic(), output.partition(), output.key(), output.value());
        output.headers().forEach((name, value) -> record.headers().add(name, value));
        return record;
    }
}
