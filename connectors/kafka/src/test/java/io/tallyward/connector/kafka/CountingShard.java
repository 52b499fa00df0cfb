package io.tallyward.connector.kafka;

import java.nio.charset.StandardCharsets;
import java.util.ArrayList;
import java.util.List;
import java.util.Map;
import java.util.Set;
import java.util.TreeMap;
import java.util.TreeSet;
import java.util.function.Consumer;
import java.util.function.Predicate;
import org.apache.kafka.clients.consumer.ConsumerRecord;

/**
 * The smallest shard whose mistakes show: it counts records per key, keeps the counts as its state, and tells of every
 * record it has counted, so that a lost step, a repeated step and a half step all change what can be read afterwards.
 */
final class CountingShard implements HostedShard {

    private final String stateTopic;
    private final String toldTopic;
    private final int partition;
    private final Consumer<String> journal;
    private final TreeMap<String, Long> counts = new TreeMap<>();
    private final TreeSet<String> changed = new TreeSet<>();
    private final List<Output> told = new ArrayList<>();

    /** Topics of which it says that they are not in what was restored. */
    Set<String> unread = Set.of();

    /** How many of the last state records it wants to see first. */
    int foresight;

    /** What it says that it has ready, until the next drain. */
    long pending;

    CountingShard(String stateTopic, String toldTopic, int partition, Consumer<String> journal) {
        this.stateTopic = stateTopic;
        this.toldTopic = toldTopic;
        this.partition = partition;
        this.journal = journal;
    }

    @Override
    public int foresight() {
        return foresight;
    }

    @Override
    public void foresee(byte[] key, byte[] value) {
        journal.accept("foresee " + text(key) + "=" + text(value));
    }

    @Override
    public void restore(byte[] key, byte[] value) {
        counts.put(text(key), Long.parseLong(text(value)));
        journal.accept("restore " + text(key) + "=" + text(value));
    }

    @Override
    public boolean hasRead(String topic) {
        return !unread.contains(topic);
    }

    @Override
    public void apply(ConsumerRecord<byte[], byte[]> record) {
        if (record.value() == null) {
            throw new IllegalStateException("a record without a value");
        }
        String key = text(record.key());
        counts.merge(key, 1L, Long::sum);
        changed.add(key);
        told.add(Output.byKey(toldTopic, record.key(), record.value()));
    }

    @Override
    public void passTime(long nowMillis, Predicate<String> caughtUp) {
        journal.accept("time " + nowMillis + " caught up " + caughtUp.test("crossings"));
        if (caughtUp.test("ring-the-bell")) {
            told.add(Output.byKey(toldTopic, bytes("bell"), bytes("rung")));
        }
    }

    @Override
    public long pendingBytes() {
        return pending;
    }

    @Override
    public List<Output> drain() {
        pending = 0;
        List<Output> outputs = new ArrayList<>(told);
        for (String key : changed) {
            outputs.add(Output.state(
                    stateTopic, partition, bytes(key), bytes(counts.get(key).toString())));
        }
        told.clear();
        changed.clear();
        return outputs;
    }

    @Override
    public void committed() {
        journal.accept("committed " + counts);
    }

    @Override
    public void released() {
        journal.accept("released");
    }

    Map<String, Long> counts() {
        return Map.copyOf(counts);
    }

    static byte[] bytes(String text) {
        return text.getBytes(StandardCharsets.UTF_8);
    }

    static String text(byte[] bytes) {
        return new String(bytes, StandardCharsets.UTF_8);
    }
}
