package io.tallyward.connector.kafka;

import java.util.List;
import java.util.function.Predicate;
import org.apache.kafka.clients.consumer.ConsumerRecord;

/**
 * A state machine for one partition number, as its host sees it. All methods are called by one thread at a time, in this
 * order: {@link #foresee} for some of the last state records, {@link #restore} for every surviving state record, {@link #committed} once, then any number of {@link #apply},
 * {@link #passTime} and {@link #drain}, with {@link #committed} after each drain that became durable, and finally
 * {@link #released}. After a drain that did not become durable the shard is released and never used again.
 *
 * <p>An exception from any method is a broken invariant: the worker that hosts the shard stops for good.
 */
public interface HostedShard {

    /** How many of the last state records {@link #foresee} is shown before the first is restored, about; 0 for none. */
    default int foresight() {
        return 0;
    }

    /**
     * Shows one of the last committed state records, which will be restored in its turn: what it makes void need not be
     * taken back. Only a hint; any of them may be left out.
     */
    default void foresee(byte[] key, byte[] value) {}

    /**
     * Takes back one state record that was written earlier. Records come in log order; some that were later overwritten
     * may still be among them.
     *
     * @param key as it was written
     * @param value as it was written; null where the key was removed
     */
    void restore(byte[] key, byte[] value);

    /** Whether what was restored may hold anything of an input topic; asked where no offset is committed for it. */
    default boolean hasRead(String topic) {
        return true;
    }

    /** Takes one input record. Records of one input partition come in offset order, each exactly once. */
    void apply(ConsumerRecord<byte[], byte[]> record);

    /**
     * Lets wall-clock time pass; called before each drain, that is once per commit interval.
     *
     * @param nowMillis wall-clock time in milliseconds since 1970
     * @param caughtUp tells for an input topic whether everything in this shard's partition of it has been applied, as the
     *     broker confirmed within the last few seconds. It is false while that is not known: during an outage, and until
     *     the broker has answered again. A shard that measures idleness starts afresh whenever it hears false.
     */
    void passTime(long nowMillis, Predicate<String> caughtUp);

    /**
     * Everything to be made durable since the last drain, in the order in which it is to be written. State records go to
     * the group's state topic, into the shard's own partition, and are at most 512 kB each.
     */
    List<Output> drain();

    /**
     * About how many bytes of foreign data the next drain will hand out. When it is much, it is drained and committed before
     * the interval has passed, so that memory stays bounded whatever the input; asked after every poll, so it must be cheap.
     */
    default long pendingBytes() {
        return 0;
    }

    /** All that was drained (or restored) so far is durable: the moment to publish metrics and snapshots. */
    void committed();

    /** The shard is let go; stop publishing. */
    void released();
}
