package io.tallyward.demo.chaos;

import java.time.Duration;
import java.util.ArrayList;
import java.util.HashMap;
import java.util.List;
import java.util.Map;
import java.util.Optional;
import java.util.Set;
import java.util.concurrent.ExecutionException;
import java.util.concurrent.TimeUnit;
import java.util.concurrent.TimeoutException;
import org.apache.kafka.clients.admin.Admin;
import org.apache.kafka.clients.admin.AdminClientConfig;
import org.apache.kafka.clients.admin.ListOffsetsResult.ListOffsetsResultInfo;
import org.apache.kafka.clients.admin.OffsetSpec;
import org.apache.kafka.clients.consumer.OffsetAndMetadata;
import org.apache.kafka.common.TopicPartition;

/**
 * Sees from outside when a monitor has recovered: when its groups have committed everything that lay in their topics at the
 * moment of the fault. Not thread-safe.
 */
final class Recoveries implements AutoCloseable {

    private static final long PATIENCE_SECONDS = 6;

    private final Admin admin;
    private final Map<String, List<TopicPartition>> groups;
    private final List<Pending> pending = new ArrayList<>();

    private record Pending(Strike strike, Map<TopicPartition, Long> goals) {}

    /** One fault and what came of it. */
    static final class Strike {
        private final Fault fault;
        private final String victim;
        private final boolean tooSoon;
        private final Duration moment;
        private final long events;
        private final long beganNanos = System.nanoTime();
        private Duration recovery;

        /**
         * A fault that strikes now.
         *
         * @param victim whom
         * @param tooSoon whether an earlier one is still being recovered from
         * @param moment time since the start of the run
         * @param events how many events have been sent
         */
        Strike(Fault fault, String victim, boolean tooSoon, Duration moment, long events) {
            this.fault = fault;
            this.victim = victim;
            this.tooSoon = tooSoon;
            this.moment = moment;
            this.events = events;
        }

        Fault fault() {
            return fault;
        }

        String victim() {
            return victim;
        }

        boolean tooSoon() {
            return tooSoon;
        }

        Duration moment() {
            return moment;
        }

        long events() {
            return events;
        }

        /** From the strike to the commit that caught up; empty as long as there is none. */
        Optional<Duration> recovery() {
            return Optional.ofNullable(recovery);
        }
    }

    /**
     * Watches groups.
     *
     * @param groups by name of the group, the partitions that it reads
     */
    Recoveries(String bootstrapServers, Map<String, List<TopicPartition>> groups) {
        this.groups = Map.copyOf(groups);
        admin = Admin.create(Map.of(
                AdminClientConfig.BOOTSTRAP_SERVERS_CONFIG,
                bootstrapServers,
                AdminClientConfig.REQUEST_TIMEOUT_MS_CONFIG,
                2_000,
                AdminClientConfig.DEFAULT_API_TIMEOUT_MS_CONFIG,
                4_000,
                AdminClientConfig.RECONNECT_BACKOFF_MAX_MS_CONFIG,
                500));
    }

    /** The present ends of all topics that are there; empty when the broker does not say. */
    Optional<Map<TopicPartition, Long>> ends() throws InterruptedException {
        Map<TopicPartition, OffsetSpec> wanted = new HashMap<>();
        try {
            Set<String> topics = admin.listTopics().names().get(PATIENCE_SECONDS, TimeUnit.SECONDS);
            groups.values().stream()
                    .flatMap(List::stream)
                    .filter(partition -> topics.contains(partition.topic()))
                    .forEach(partition -> wanted.put(partition, OffsetSpec.latest()));
            Map<TopicPartition, Long> ends = new HashMap<>();
            for (Map.Entry<TopicPartition, ListOffsetsResultInfo> end : admin.listOffsets(wanted)
                    .all()
                    .get(PATIENCE_SECONDS, TimeUnit.SECONDS)
                    .entrySet()) {
                ends.put(end.getKey(), end.getValue().offset());
            }
            return Optional.of(ends);
        } catch (ExecutionException | TimeoutException away) {
            return Optional.empty();
        }
    }

    /** Begins to wait for the recovery from a fault; goals are the ends at its moment. */
    void await(Strike strike, Map<TopicPartition, Long> goals) {
        pending.add(new Pending(strike, Map.copyOf(goals)));
    }

    /** Looks how far the groups are; returns whether nothing is left to be recovered from. */
    boolean look() throws InterruptedException {
        if (pending.isEmpty()) {
            return true;
        }
        Optional<Map<TopicPartition, Long>> committed = committed();
        if (committed.isEmpty()) {
            return false;
        }
        for (Pending waiting : List.copyOf(pending)) {
            if (reached(committed.get(), waiting.goals())) {
                waiting.strike().recovery = Duration.ofNanos(System.nanoTime() - waiting.strike().beganNanos);
                pending.remove(waiting);
            }
        }
        return pending.isEmpty();
    }

    /** Whether the groups have committed everything there is. */
    boolean allDone() throws InterruptedException {
        Optional<Map<TopicPartition, Long>> ends = ends();
        Optional<Map<TopicPartition, Long>> committed = committed();
        return ends.isPresent() && committed.isPresent() && reached(committed.get(), ends.get());
    }

    private static boolean reached(Map<TopicPartition, Long> committed, Map<TopicPartition, Long> goals) {
        return goals.entrySet().stream().allMatch(goal -> committed.getOrDefault(goal.getKey(), 0L) >= goal.getValue());
    }

    private Optional<Map<TopicPartition, Long>> committed() throws InterruptedException {
        Map<TopicPartition, Long> committed = new HashMap<>();
        try {
            for (String group : groups.keySet()) {
                Map<TopicPartition, OffsetAndMetadata> offsets = admin.listConsumerGroupOffsets(group)
                        .partitionsToOffsetAndMetadata()
                        .get(PATIENCE_SECONDS, TimeUnit.SECONDS);
                offsets.forEach((partition, offset) -> {
                    if (offset != null) {
                        committed.put(partition, offset.offset());
                    }
                });
            }
            return Optional.of(committed);
        } catch (ExecutionException | TimeoutException away) {
            return Optional.empty();
        }
    }

    @Override
    public void close() {
        admin.close(Duration.ofSeconds(1));
    }
}
