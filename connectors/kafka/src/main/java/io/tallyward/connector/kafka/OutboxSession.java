package io.tallyward.connector.kafka;

import java.time.Duration;
import java.time.InstantSource;
import java.util.Collection;
import java.util.HashMap;
import java.util.List;
import java.util.Map;
import java.util.Optional;
import org.apache.kafka.clients.consumer.CloseOptions;
import org.apache.kafka.clients.consumer.Consumer;
import org.apache.kafka.clients.consumer.ConsumerRebalanceListener;
import org.apache.kafka.clients.consumer.ConsumerRecord;
import org.apache.kafka.clients.consumer.OffsetAndMetadata;
import org.apache.kafka.common.KafkaException;
import org.apache.kafka.common.TopicPartition;
import org.apache.kafka.common.errors.InterruptException;
import org.apache.kafka.common.errors.WakeupException;

/** One membership of an outbox reader in its group, driven step by step by one thread. */
final class OutboxSession implements ConsumerRebalanceListener {

    private static final Duration POLL = Duration.ofMillis(200);
    private static final Duration COMMIT_PATIENCE = Duration.ofSeconds(5);

    private final OutboxSource source;
    private final OutboxLedger ledger;
    private final Delivery delivery;
    private final InstantSource clock;
    private final Cluster cluster;
    private final Consumer<byte[], byte[]> consumer;
    private final Contact contact;
    private final Map<TopicPartition, Long> committed = new HashMap<>();
    private KafkaException commitTrouble;
    private boolean joined;

    OutboxSession(
            OutboxSource source, OutboxClients clients, OutboxLedger ledger, Delivery delivery, InstantSource clock) {
        this.source = source;
        this.ledger = ledger;
        this.delivery = delivery;
        this.clock = clock;
        this.cluster = clients.cluster();
        try {
            if (!cluster.partitions(List.of(source.topic())).containsKey(source.topic())) {
                throw new BrokerException("notices topic " + source.topic() + " does not exist on " + source.broker()
                        + ": the deciding part of the service creates it; nothing to do here");
            }
            this.consumer = clients.notices();
        } catch (RuntimeException failure) {
            cluster.close();
            throw failure;
        }
        this.contact = new Contact(consumer, cluster);
        consumer.subscribe(List.of(source.topic()), this);
    }

    /** Hands out what has come, and commits what is done. */
    void step() {
        boolean full = ledger.count() + source.mostPerPoll() > source.mostPending();
        if (full) {
            consumer.pause(consumer.assignment());
        } else {
            consumer.resume(consumer.paused());
        }
        for (ConsumerRecord<byte[], byte[]> record : consumer.poll(POLL)) {
            OutboxRecord notice = ledger.hand(record);
            if (Filler.is(record)) {
                notice.done();
            } else {
                delivery.deliver(notice);
            }
        }
        contact.refresh(clock.millis());
        commitDone();
    }

    /** What is wrong although polling works; empty if nothing is. */
    Optional<KafkaException> trouble() {
        return commitTrouble == null ? contact.trouble() : Optional.of(commitTrouble);
    }

    boolean joined() {
        return joined;
    }

    private void commitDone() {
        Map<TopicPartition, OffsetAndMetadata> due = new HashMap<>();
        for (TopicPartition partition : consumer.assignment()) {
            long reached = ledger.lowest(partition).orElseGet(() -> consumer.position(partition));
            if (!Long.valueOf(reached).equals(committed.get(partition))) {
                due.put(partition, new OffsetAndMetadata(reached));
            }
        }
        if (due.isEmpty()) {
            commitTrouble = null;
            return;
        }
        try {
            consumer.commitSync(due, COMMIT_PATIENCE);
            due.forEach((partition, reached) -> committed.put(partition, reached.offset()));
            commitTrouble = null;
        } catch (WakeupException | InterruptException stop) {
            throw stop;
        } catch (KafkaException failure) {
            commitTrouble = failure;
        }
    }

    @Override
    public void onPartitionsAssigned(Collection<TopicPartition> given) {
        joined = true;
        contact.reset();
    }

    @Override
    public void onPartitionsRevoked(Collection<TopicPartition> taken) {
        commitDone();
        onPartitionsLost(taken);
    }

    @Override
    public void onPartitionsLost(Collection<TopicPartition> taken) {
        ledger.drop(taken);
        taken.forEach(committed::remove);
        contact.reset();
    }

    void wakeup() {
        consumer.wakeup();
    }

    /** Commits what is done, if the broker takes it, and leaves. */
    void close() {
        try {
            consumer.close(CloseOptions.timeout(COMMIT_PATIENCE));
        } catch (KafkaException failure) {
            commitTrouble = failure;
        } finally {
            ledger.dropAll();
            cluster.close();
        }
    }
}
