package io.tallyward.connector.kafka;

import java.time.Duration;
import java.util.HashMap;
import java.util.List;
import java.util.Map;
import java.util.Objects;
import java.util.Optional;
import java.util.UUID;
import java.util.function.IntFunction;

/**
 * What a runner needs to know about one kind of shard.
 *
 * @param id the consumer group; every instance of the service uses the same
 * @param instance tells this instance from the others running under the same group; part of its transactional ids, so that
 *     two instances alive at once must never share it
 * @param inputTopics what the shards read; all must have the same number of partitions
 * @param missingInput what to do about an input topic that does not exist, for messages
 * @param stateTopic the compacted topic in which shard n keeps its state in partition n
 * @param internalTopics given the number of input partitions, the topics to be there before the first shard starts; missing
 *     ones are created
 * @param shards makes the shards
 * @param start where to read from while nothing is committed
 * @param rereads whether the shards can take their input again without taking it twice; if not, state without committed
 *     offsets is refused
 * @param commitInterval how often effects become durable, 10 ms to 1 min
 * @param workers how many threads share the partitions, 1 to 64
 * @param protocol how the members agree on who reads what
 * @param member a name that this instance keeps when it is started again; it then takes its partitions back at once, and
 *     whoever still runs under that name is shut out. Empty for an instance that the group has never seen before. Only
 *     with the classic protocol.
 * @param clientProperties properties of the Kafka clients; {@code bootstrap.servers} at least. Those on which exactness
 *     rests are set by the runner and cannot be changed here.
 */
public record ShardGroup(
        String id,
        String instance,
        List<String> inputTopics,
        String missingInput,
        String stateTopic,
        IntFunction<List<InternalTopic>> internalTopics,
        ShardFactory shards,
        StartPosition start,
        boolean rereads,
        Duration commitInterval,
        int workers,
        GroupProtocol protocol,
        Optional<String> member,
        Map<String, String> clientProperties) {

    static final Duration SHORTEST_INTERVAL = Duration.ofMillis(10);
    static final Duration LONGEST_INTERVAL = Duration.ofMinutes(1);
    static final int MOST_WORKERS = 64;

    public ShardGroup {
        Objects.requireNonNull(id, "id");
        Objects.requireNonNull(instance, "instance");
        inputTopics = List.copyOf(inputTopics);
        Objects.requireNonNull(missingInput, "missingInput");
        Objects.requireNonNull(stateTopic, "stateTopic");
        Objects.requireNonNull(internalTopics, "internalTopics");
        Objects.requireNonNull(shards, "shards");
        Objects.requireNonNull(start, "start");
        Objects.requireNonNull(commitInterval, "commitInterval");
        Objects.requireNonNull(protocol, "protocol");
        Objects.requireNonNull(member, "member");
        clientProperties = Map.copyOf(clientProperties);
        if (inputTopics.isEmpty() || inputTopics.stream().distinct().count() != inputTopics.size()) {
            throw new IllegalArgumentException("inputTopics: " + inputTopics + " (expected: at least one, each once)");
        }
        if (commitInterval.compareTo(SHORTEST_INTERVAL) < 0 || commitInterval.compareTo(LONGEST_INTERVAL) > 0) {
            throw new IllegalArgumentException("commitInterval: " + commitInterval + " (expected: " + SHORTEST_INTERVAL
                    + " to " + LONGEST_INTERVAL + ")");
        }
        if (workers < 1 || workers > MOST_WORKERS) {
            throw new IllegalArgumentException("workers: " + workers + " (expected: 1 to " + MOST_WORKERS + ")");
        }
        if (clientProperties.getOrDefault("bootstrap.servers", "").isBlank()) {
            throw new IllegalArgumentException("clientProperties: no bootstrap.servers (expected: host:port)");
        }
    }

    /** Where the broker is, for messages. */
    public String broker() {
        return clientProperties.get("bootstrap.servers");
    }

    /** Leaves the client properties out: they may hold credentials. */
    @Override
    public String toString() {
        return "ShardGroup[" + id + " reading " + inputTopics + " at " + broker() + "]";
    }

    public static Builder builder(String id) {
        return new Builder(id);
    }

    /** Starts from: an instance name drawn at random, earliest, one second, one worker, the classic protocol, no internal topics, no rereading. */
    public static final class Builder {
        private final String id;
        private final Map<String, String> clientProperties = new HashMap<>();
        private String instance = UUID.randomUUID().toString();
        private List<String> inputTopics = List.of();
        private String missingInput = "create it or correct input.topics";
        private String stateTopic;
        private IntFunction<List<InternalTopic>> internalTopics = partitions -> List.of();
        private ShardFactory shards;
        private StartPosition start = StartPosition.earliest();
        private boolean rereads;
        private Duration commitInterval = Duration.ofSeconds(1);
        private int workers = 1;
        private GroupProtocol protocol = GroupProtocol.CLASSIC;
        private Optional<String> member = Optional.empty();

        private Builder(String id) {
            this.id = id;
        }

        public Builder instance(String name) {
            this.instance = name;
            return this;
        }

        public Builder inputTopics(List<String> topics) {
            this.inputTopics = topics;
            return this;
        }

        /** What to do about an input topic that does not exist; as it stands, create it or correct the configuration. */
        public Builder missingInput(String advice) {
            this.missingInput = advice;
            return this;
        }

        public Builder stateTopic(String topic) {
            this.stateTopic = topic;
            return this;
        }

        public Builder internalTopics(IntFunction<List<InternalTopic>> topicsForPartitions) {
            this.internalTopics = topicsForPartitions;
            return this;
        }

        public Builder shards(ShardFactory factory) {
            this.shards = factory;
            return this;
        }

        public Builder start(StartPosition position) {
            this.start = position;
            return this;
        }

        /** Says that the shards can take their input again without taking it twice. */
        public Builder rereads() {
            this.rereads = true;
            return this;
        }

        public Builder commitInterval(Duration interval) {
            this.commitInterval = interval;
            return this;
        }

        public Builder workers(int count) {
            this.workers = count;
            return this;
        }

        /** A name that is kept across restarts; empty for none. */
        public Builder member(Optional<String> name) {
            this.member = name;
            return this;
        }

        public Builder protocol(GroupProtocol groupProtocol) {
            this.protocol = groupProtocol;
            return this;
        }

        public Builder bootstrapServers(String servers) {
            clientProperties.put("bootstrap.servers", servers);
            return this;
        }

        public Builder clientProperties(Map<String, String> properties) {
            clientProperties.putAll(properties);
            return this;
        }

        public ShardGroup build() {
            return new ShardGroup(
                    id,
                    instance,
                    inputTopics,
                    missingInput,
                    stateTopic,
                    internalTopics,
                    shards,
                    start,
                    rereads,
                    commitInterval,
                    workers,
                    protocol,
                    member,
                    clientProperties);
        }
    }
}
