package io.tallyward.connector.kafka;

import static io.tallyward.connector.kafka.CountingShard.bytes;
import static io.tallyward.connector.kafka.CountingShard.text;
import static org.junit.jupiter.api.Assertions.assertEquals;

import io.tallyward.testkit.BrokerUnderTest;
import java.time.Clock;
import java.time.Duration;
import java.util.ArrayList;
import java.util.HashMap;
import java.util.List;
import java.util.Map;
import java.util.TreeMap;
import java.util.concurrent.atomic.AtomicReference;
import java.util.function.IntFunction;
import java.util.function.UnaryOperator;
import java.util.stream.Collectors;
import java.util.stream.Stream;
import org.apache.kafka.clients.consumer.OffsetAndMetadata;
import org.apache.kafka.clients.producer.ProducerRecord;
import org.apache.kafka.common.TopicPartition;
import org.awaitility.Awaitility;

/** Topics and a group for counting shards, and the truth to compare what was counted with. */
final class CountingBench {

    static final int PARTITIONS = 4;
    static final List<String> EXPERIMENTS =
            List.of("quay-banner", "fare-chip", "return-prompt", "cabin-upsell", "deck-map");
    static final Duration PATIENCE = Duration.ofSeconds(30);

    final BrokerUnderTest broker;
    final String group;
    final String input;
    final List<String> inputs;
    final GroupProtocol protocol;
    final String states;
    final String told;
    final AtomicReference<Throwable> fatal = new AtomicReference<>();
    private int produced;

    CountingBench(BrokerUnderTest broker) {
        this(broker, GroupProtocol.CLASSIC, 1);
    }

    CountingBench(BrokerUnderTest broker, GroupProtocol protocol, int inputTopics) {
        this.broker = broker;
        this.protocol = protocol;
        this.group = broker.uniqueName("counters");
        this.inputs = Stream.generate(() -> broker.newTopic("crossings", PARTITIONS))
                .limit(inputTopics)
                .toList();
        this.input = inputs.get(0);
        this.states = group + "-states";
        this.told = group + "-told";
    }

    ShardGroup group(UnaryOperator<ShardGroup.Builder> changes) {
        return changes.apply(ShardGroup.builder(group)
                        .bootstrapServers(broker.bootstrapServers())
                        .clientProperties(Map.of("heartbeat.interval.ms", "300", "session.timeout.ms", "6000"))
                        .protocol(protocol)
                        .inputTopics(inputs)
                        .stateTopic(states)
                        .internalTopics(partitions ->
                                List.of(InternalTopic.compacted(states, partitions), InternalTopic.kept(told, 1)))
                        .shards((partition, partitions) -> new CountingShard(states, told, partition, line -> {}))
                        .commitInterval(Duration.ofMillis(100)))
                .build();
    }

    ShardRunner run() {
        return run(builder -> builder);
    }

    ShardRunner run(UnaryOperator<ShardGroup.Builder> changes) {
        return ShardRunner.start(group(changes), Clock.systemUTC(), (name, cause) -> fatal.set(cause));
    }

    ShardRunner run(ShardGroup changed, IntFunction<Clients> clients) {
        return ShardRunner.start(changed, Clock.systemUTC(), (name, cause) -> fatal.set(cause), clients);
    }

    /** Produces events whose values are unique, spread over experiments and partitions. */
    void produce(int count) {
        List<ProducerRecord<byte[], byte[]>> records = new ArrayList<>();
        for (int i = 0; i < count; i++, produced++) {
            String experiment = EXPERIMENTS.get(produced % EXPERIMENTS.size());
            records.add(new ProducerRecord<>(
                    inputs.get(produced / PARTITIONS % inputs.size()),
                    produced % PARTITIONS,
                    bytes(experiment),
                    bytes(Integer.toString(produced))));
        }
        broker.produce(records);
    }

    /** The beginning of every input partition, as an operator would set it. */
    Map<TopicPartition, OffsetAndMetadata> beginnings() {
        Map<TopicPartition, OffsetAndMetadata> beginnings = new HashMap<>();
        for (int partition = 0; partition < PARTITIONS; partition++) {
            beginnings.put(new TopicPartition(input, partition), new OffsetAndMetadata(0));
        }
        return beginnings;
    }

    int told() {
        return broker.readAll(told).size();
    }

    void awaitTold(int count) {
        Awaitility.await().atMost(PATIENCE).pollInterval(Duration.ofMillis(100)).until(() -> told() >= count);
    }

    void awaitRunning(ShardRunner runner, int partitions) {
        Awaitility.await()
                .atMost(PATIENCE)
                .pollInterval(Duration.ofMillis(20))
                .until(() -> runner.status().healthy()
                        && runner.status().partitions().size() == partitions);
    }

    /** Waits for the last event and then compares row by row: every event told of once, every count in the state right. */
    void assertExact() {
        awaitTold(produced);
        Map<Integer, Long> tellings = broker.readAll(told).stream()
                .collect(Collectors.groupingBy(
                        record -> Integer.parseInt(text(record.value())), TreeMap::new, Collectors.counting()));
        Map<Integer, Long> truth = new TreeMap<>();
        for (int event = 0; event < produced; event++) {
            truth.put(event, 1L);
        }
        assertEquals(truth, tellings);
        assertEquals(trueCounts(), countsInState());
    }

    private Map<String, Long> trueCounts() {
        Map<String, Long> counts = new HashMap<>();
        for (int event = 0; event < produced; event++) {
            counts.merge(EXPERIMENTS.get(event % EXPERIMENTS.size()) + "/" + event % PARTITIONS, 1L, Long::sum);
        }
        return counts;
    }

    private Map<String, Long> countsInState() {
        Map<String, Long> counts = new HashMap<>();
        broker.readAll(states)
                .forEach(record -> counts.put(
                        text(record.key()) + "/" + record.partition(), Long.parseLong(text(record.value()))));
        return counts;
    }
}
