package io.tallyward.connector.kafka;

import java.util.List;
import java.util.function.Predicate;
import java.util.function.Supplier;
import org.apache.kafka.clients.consumer.ConsumerRecord;
import org.apache.kafka.common.errors.InterruptException;

/**
 * A shard whose exceptions come out as {@link ShardFailure} and say where they happened. That a broker does not answer a shard
 * is an outage like any other, and comes out as it is.
 */
final class GuardedShard {

    private final String name;
    private final HostedShard shard;

    GuardedShard(ShardGroup group, int partition, int partitions) {
        this.name = "shard " + partition + " of group " + group.id();
        this.shard = guarded("could not be made", () -> group.shards().create(partition, partitions));
    }

    int foresight() {
        return guarded("failed to say what it wants to foresee", shard::foresight);
    }

    void foresee(ConsumerRecord<byte[], byte[]> record) {
        try {
            shard.foresee(record.key(), record.value());
        } catch (RuntimeException broken) {
            throw new ShardFailure(name + " failed to foresee " + at(record), broken);
        }
    }

    void restore(ConsumerRecord<byte[], byte[]> record) {
        try {
            shard.restore(record.key(), record.value());
        } catch (RuntimeException broken) {
            throw new ShardFailure(name + " failed to restore " + at(record), broken);
        }
    }

    boolean hasRead(String topic) {
        return guarded("failed to say what it has read", () -> shard.hasRead(topic));
    }

    void apply(ConsumerRecord<byte[], byte[]> record) {
        try {
            shard.apply(record);
        } catch (BrokerException | InterruptException outage) {
            throw outage;
        } catch (RuntimeException broken) {
            throw new ShardFailure(name + " failed at " + at(record), broken);
        }
    }

    void passTime(long nowMillis, Predicate<String> caughtUp) {
        guarded("failed as time passed", () -> {
            shard.passTime(nowMillis, caughtUp);
            return null;
        });
    }

    long pendingBytes() {
        return shard.pendingBytes();
    }

    List<Output> drain() {
        return guarded("failed to hand out its effects", shard::drain);
    }

    void committed() {
        guarded("failed after a commit", () -> {
            shard.committed();
            return null;
        });
    }

    void released() {
        guarded("failed to let go", () -> {
            shard.released();
            return null;
        });
    }

    private <T> T guarded(String what, Supplier<T> step) {
        try {
            return step.get();
        } catch (BrokerException | InterruptException outage) {
            throw outage;
        } catch (RuntimeException broken) {
            throw new ShardFailure(name + " " + what, broken);
        }
    }

    private static String at(ConsumerRecord<byte[], byte[]> record) {
        return record.topic() + "-" + record.partition() + "@" + record.offset();
    }
}
