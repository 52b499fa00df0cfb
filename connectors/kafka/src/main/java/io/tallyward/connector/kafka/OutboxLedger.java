package io.tallyward.connector.kafka;

import java.time.Instant;
import java.util.Collection;
import java.util.HashMap;
import java.util.Map;
import java.util.Optional;
import java.util.OptionalLong;
import java.util.Set;
import java.util.TreeMap;
import org.apache.kafka.clients.consumer.ConsumerRecord;
import org.apache.kafka.common.TopicPartition;

/** Which notices have been handed out and are not done. Thread-safe: guarded by its own monitor. */
final class OutboxLedger {

    private final Map<TopicPartition, TreeMap<Long, Handed>> pending = new HashMap<>();
    private int count;
    private long delivered;

    /** Notes a record as handed out. */
    synchronized OutboxRecord hand(ConsumerRecord<byte[], byte[]> record) {
        Handed handed = new Handed(record);
        pending.computeIfAbsent(handed.source, unused -> new TreeMap<>()).put(record.offset(), handed);
        count++;
        return handed;
    }

    /** The lowest offset of a partition that is not done; empty if nothing is pending there. */
    synchronized OptionalLong lowest(TopicPartition partition) {
        TreeMap<Long, Handed> open = pending.get(partition);
        return open == null || open.isEmpty() ? OptionalLong.empty() : OptionalLong.of(open.firstKey());
    }

    /** Forgets partitions: their notices are somebody else's now, or will be handed out again. */
    synchronized void drop(Collection<TopicPartition> partitions) {
        for (TopicPartition partition : partitions) {
            TreeMap<Long, Handed> open = pending.remove(partition);
            if (open != null) {
                count -= open.size();
                open.values().forEach(handed -> handed.wanted = false);
            }
        }
    }

    synchronized void dropAll() {
        drop(Set.copyOf(pending.keySet()));
    }

    synchronized int count() {
        return count;
    }

    synchronized long delivered() {
        return delivered;
    }

    synchronized Optional<Instant> oldest() {
        return pending.values().stream()
                .flatMap(open -> open.values().stream())
                .map(handed -> Instant.ofEpochMilli(handed.timestampMillis()))
                .min(Instant::compareTo);
    }

    private synchronized void done(Handed handed) {
        if (handed.wanted && pending.get(handed.source).remove(handed.offset()) != null) {
            count--;
            delivered++;
        }
    }

    private final class Handed implements OutboxRecord {
        private final ConsumerRecord<byte[], byte[]> record;
        private final TopicPartition source;
        private volatile boolean wanted = true;

        private Handed(ConsumerRecord<byte[], byte[]> record) {
            this.record = record;
            this.source = new TopicPartition(record.topic(), record.partition());
        }

        @Override
        public int partition() {
            return record.partition();
        }

        @Override
        public long offset() {
            return record.offset();
        }

        @Override
        public long timestampMillis() {
            return record.timestamp();
        }

        @Override
        public byte[] key() {
            return record.key();
        }

        @Override
        public byte[] value() {
            return record.value();
        }

        @Override
        public boolean wanted() {
            return wanted;
        }

        @Override
        public void done() {
            OutboxLedger.this.done(this);
        }
    }
}
