package io.tallyward.connector.kafka;

import static java.util.Map.entry;

import java.time.Duration;
import java.util.HashMap;
import java.util.Map;
import java.util.Set;
import org.apache.kafka.clients.admin.Admin;

/**
 * Properties of the clients. Three layers: proposals made here, which measurements on two shared cores support; what the
 * operator sets; and what exactness rests on, which comes last.
 */
final class ClientSettings {

    /** Would be shared by all workers of all groups, which each need their own. */
    private static final Set<String> NOT_PASSED_ON =
            Set.of("group.instance.id", "group.remote.assignor", "transactional.id", "client.id");

    /** How long one request may take; well under the transaction timeout, so that an outage is noticed within it. */
    private static final String REQUEST_TIMEOUT_MILLIS = "10000";

    /**
     * An abandoned transaction holds back its successor and every reader of what it wrote until it times out, so this is
     * short; commits take milliseconds.
     */
    private static final String TRANSACTION_TIMEOUT_MILLIS = "15000";

    /** The longest that a fetch may wait for its fill; latency is then bounded by this and the commit interval. */
    private static final long LONGEST_FETCH_WAIT_MILLIS = 250;

    private static final Map<String, String> PROPOSED_FOR_ALL = Map.ofEntries(
            entry("request.timeout.ms", REQUEST_TIMEOUT_MILLIS),
            entry("default.api.timeout.ms", "20000"),
            entry("reconnect.backoff.ms", "100"),
            entry("reconnect.backoff.max.ms", "5000"),
            entry("enable.metrics.push", "false"));

    /** Large fetches: with the library's own settings polling costs about a third more CPU per event. */
    private static final Map<String, String> PROPOSED_FOR_INPUT = Map.ofEntries(
            entry("max.poll.records", "20000"),
            entry("fetch.min.bytes", "1048576"),
            entry("max.partition.fetch.bytes", "4194304"),
            entry("receive.buffer.bytes", "1048576"),
            entry("session.timeout.ms", "15000"),
            entry("heartbeat.interval.ms", "3000"));

    /** State is read from end to end; what the worker has not taken yet waits in the socket. */
    private static final Map<String, String> PROPOSED_FOR_STATE = Map.ofEntries(
            entry("max.poll.records", "5000"),
            entry("max.partition.fetch.bytes", "4194304"),
            entry("receive.buffer.bytes", "4194304"));

    private static final Map<String, String> FIXED_FOR_READING = Map.ofEntries(
            entry("isolation.level", "read_committed"),
            entry("enable.auto.commit", "false"),
            entry("allow.auto.create.topics", "false"));

    /** Whether a broker is there must be known soon; whoever asks asks again. */
    private static final Map<String, String> PROPOSED_FOR_QUESTIONS =
            Map.of("request.timeout.ms", "4000", "default.api.timeout.ms", "5000");

    private static final Map<String, String> PROPOSED_FOR_OUTPUT = Map.ofEntries(
            entry("compression.type", "lz4"),
            entry("batch.size", "131072"),
            entry("max.block.ms", REQUEST_TIMEOUT_MILLIS),
            entry("delivery.timeout.ms", TRANSACTION_TIMEOUT_MILLIS),
            entry("transaction.timeout.ms", TRANSACTION_TIMEOUT_MILLIS));

    private ClientSettings() {}

    static Cluster cluster(Map<String, String> clientProperties) {
        return new AdminCluster(Admin.create(layered(clientProperties, PROPOSED_FOR_QUESTIONS, Map.of())));
    }

    /** For reading a topic as a member of a group whose partitions are assigned in ranges. */
    static Map<String, Object> input(ShardGroup group, int worker) {
        Map<String, String> proposed = new HashMap<>(PROPOSED_FOR_INPUT);
        proposed.put("fetch.max.wait.ms", Long.toString(fetchWaitMillis(group.commitInterval())));
        Map<String, String> fixed = new HashMap<>(FIXED_FOR_READING);
        fixed.put("group.id", group.id());
        fixed.put("client.id", clientId(group, worker));
        fixed.putAll(group.protocol().settings());
        fixed.put("auto.offset.reset", "none");
        group.member().ifPresent(member -> fixed.put("group.instance.id", member + "-" + worker));
        Map<String, Object> settings = layered(group.clientProperties(), proposed, fixed);
        settings.keySet().removeAll(group.protocol().refused());
        return settings;
    }

    static Map<String, Object> state(ShardGroup group, int worker) {
        Map<String, String> fixed = new HashMap<>(FIXED_FOR_READING);
        fixed.put("client.id", clientId(group, worker) + "-state");
        fixed.put("auto.offset.reset", "earliest");
        return layered(group.clientProperties(), PROPOSED_FOR_STATE, fixed);
    }

    /** For reading a topic once, as a member of no group. */
    static Map<String, Object> once(Map<String, String> clientProperties) {
        Map<String, String> fixed = new HashMap<>(FIXED_FOR_READING);
        fixed.put("auto.offset.reset", "earliest");
        Map<String, Object> settings = layered(clientProperties, Map.of("max.poll.records", "5000"), fixed);
        settings.keySet().removeAll(Set.of("group.id", "group.protocol"));
        return settings;
    }

    /**
     * For writing in transactions.
     *
     * @param number counts the producers of a worker, so that each has a transactional id of its own
     */
    static Map<String, Object> output(ShardGroup group, int worker, int number) {
        return output(group, worker, transactionalId(group, worker, number));
    }

    /** For ending what was written under a transactional id. */
    static Map<String, Object> output(ShardGroup group, int worker, String transactionalId) {
        Map<String, String> fixed = new HashMap<>();
        fixed.put("transactional.id", transactionalId);
        fixed.put("client.id", clientId(group, worker));
        fixed.put("acks", "all");
        fixed.put("enable.idempotence", "true");
        return layered(group.clientProperties(), PROPOSED_FOR_OUTPUT, fixed);
    }

    /** For an outbox: small polls in its own group, from the beginning where nothing is committed. */
    static Map<String, Object> outbox(Map<String, String> clientProperties, String group, int mostRecords) {
        Map<String, String> proposed = Map.of("session.timeout.ms", "15000", "heartbeat.interval.ms", "3000");
        Map<String, String> fixed = new HashMap<>(FIXED_FOR_READING);
        fixed.put("group.id", group);
        fixed.put("group.protocol", "classic");
        fixed.put("auto.offset.reset", "earliest");
        fixed.put("max.poll.records", Integer.toString(mostRecords));
        return layered(clientProperties, proposed, fixed);
    }

    /** For reading a topic without a group. */
    static Map<String, Object> logReader(Map<String, String> clientProperties, String name) {
        Map<String, String> fixed = new HashMap<>(FIXED_FOR_READING);
        fixed.put("client.id", name + "-reader");
        fixed.put("auto.offset.reset", "none");
        return layered(clientProperties, Map.of("max.poll.records", "1000"), fixed);
    }

    /** For appending in order and without repetition, outside of transactions. */
    static Map<String, Object> logWriter(Map<String, String> clientProperties, String name) {
        Map<String, String> proposed = Map.of("max.block.ms", REQUEST_TIMEOUT_MILLIS, "delivery.timeout.ms", "20000");
        Map<String, String> fixed = new HashMap<>();
        fixed.put("client.id", name + "-writer");
        fixed.put("max.in.flight.requests.per.connection", "1");
        fixed.put("acks", "all");
        fixed.put("enable.idempotence", "true");
        return layered(clientProperties, proposed, fixed);
    }

    /** The transactional id of a worker's producer by its number. */
    static String transactionalId(ShardGroup group, int worker, int number) {
        return clientId(group, worker) + "-" + number;
    }

    /** Whether a transactional id is one that some worker of the group has used. */
    static boolean isOurs(ShardGroup group, String transactionalId) {
        return transactionalId.startsWith(group.id() + "-")
                && transactionalId.substring(group.id().length()).matches("-.+-\\d+-\\d+");
    }

    /**
     * Whether a transactional id is one that the same worker of an earlier instance of the same kept name has used. Whoever has
     * joined the group under the name has shut that one out.
     */
    static boolean isPredecessor(ShardGroup group, int worker, String transactionalId) {
        String kept = group.id() + "-" + group.member().orElse("") + ".";
        return group.member().isPresent()
                && transactionalId.startsWith(kept)
                && transactionalId.substring(kept.length()).matches("[0-9a-f-]{36}-" + worker + "-\\d+")
                && !transactionalId.startsWith(clientId(group, worker) + "-");
    }

    /** A kept name goes before what tells one run of the instance from the next. */
    private static String clientId(ShardGroup group, int worker) {
        String kept = group.member().map(name -> name + ".").orElse("");
        return group.id() + "-" + kept + group.instance() + "-" + worker;
    }

    /** A tenth of the commit interval: an event then shows within one and a tenth of it and the commit itself. */
    private static long fetchWaitMillis(Duration commitInterval) {
        return Math.max(10, Math.min(LONGEST_FETCH_WAIT_MILLIS, commitInterval.toMillis() / 10));
    }

    private static Map<String, Object> layered(
            Map<String, String> operator, Map<String, String> proposed, Map<String, String> fixed) {
        Map<String, Object> settings = new HashMap<>(PROPOSED_FOR_ALL);
        settings.putAll(proposed);
        operator.forEach((name, value) -> {
            if (!NOT_PASSED_ON.contains(name)) {
                settings.put(name, value);
            }
        });
        settings.putAll(fixed);
        return settings;
    }
}
