package io.tallyward.connector.kafka;

import io.tallyward.testkit.ManualClock;
import java.time.Duration;
import java.util.ArrayList;
import java.util.Collection;
import java.util.HashMap;
import java.util.List;
import java.util.Map;
import java.util.Set;
import java.util.function.UnaryOperator;
import org.apache.kafka.clients.consumer.OffsetAndMetadata;
import org.apache.kafka.common.TopicPartition;

/** A session over scripted clients: the test is the broker, the group and the clock. */
final class ScriptedSession {

    final ScriptedClients clients = new ScriptedClients();
    final List<String> journal = clients.journal;
    final ManualClock clock = ManualClock.at("2026-05-04T06:00:00Z");
    final StatusBoard board = new StatusBoard(0);
    final Map<Integer, CountingShard> shards = new HashMap<>();
    private final ShardGroup group;
    boolean stopping;

    /** What shards made from now on say of themselves. */
    Set<String> unread = Set.of();

    int foresight;
    ShardSession session;

    ScriptedSession(int partitions, List<String> topics, UnaryOperator<ShardGroup.Builder> changes) {
        topics.forEach(topic -> {
            clients.topics.put(topic, partitions);
            clients.ids.put(topic, "first");
        });
        clients.topics.put("states", partitions);
        group = changes.apply(ShardGroup.builder("counters")
                        .bootstrapServers("127.0.0.1:9092")
                        .inputTopics(topics)
                        .stateTopic("states")
                        .shards((partition, all) -> {
                            CountingShard shard = new CountingShard("states", "told", partition, journal::add);
                            shard.unread = unread;
                            shard.foresight = foresight;
                            shards.put(partition, shard);
                            return shard;
                        }))
                .build();
        open();
    }

    void open() {
        session = new ShardSession(group, clients, clock, () -> stopping, board);
    }

    /** Gives the member these partitions, none of which has records yet, and takes away all others. */
    void assign(TopicPartition... partitions) {
        for (TopicPartition partition : partitions) {
            clients.input.updateBeginningOffsets(Map.of(partition, 0L));
            clients.input.updateEndOffsets(Map.of(partition, 0L));
        }
        clients.input.rebalance(List.of(partitions));
    }

    void stepAfterInterval() {
        stepAfter(Duration.ofSeconds(1));
    }

    void stepAfter(Duration pause) {
        clock.advance(pause);
        session.step();
    }

    /** The shards of one partition are made durable as its transactions say, before the next restoration. */
    void durable(TopicPartition input, long offset, String key, String count) {
        clients.stateRecords.clear();
        clients.state("states", input.partition(), 0, key, count);
        clients.committed.put(input, new OffsetAndMetadata(offset));
    }

    long count(int partition) {
        return shards.get(partition).counts().getOrDefault("quay-banner", 0L);
    }

    Collection<TopicPartition> reading() {
        List<TopicPartition> reading = new ArrayList<>(clients.input.assignment());
        reading.removeAll(clients.input.paused());
        return reading;
    }
}
