package io.tallyward.service.watch;

import io.tallyward.connector.kafka.InternalTopic;
import io.tallyward.connector.kafka.KeyPartitions;
import java.nio.charset.StandardCharsets;
import java.time.Duration;
import java.util.List;

/**
 * The names of everything the service owns in Kafka.
 *
 * @param prefix name of the service; groups and internal topics begin with it
 */
record TopicNames(String prefix) {

    /** Partitions of the tallies and of all that is derived from them; the experiments are spread over them. */
    static final int DECIDE_PARTITIONS = 4;

    private static final Duration REJECTS_KEPT = Duration.ofDays(14);

    String countGroup() {
        return prefix + "-count";
    }

    String decideGroup() {
        return prefix + "-decide";
    }

    String noticeGroup() {
        return prefix + "-notices";
    }

    String plans() {
        return prefix + "-plans";
    }

    String countState() {
        return prefix + "-count-state";
    }

    String tallies() {
        return prefix + "-tallies";
    }

    String decideState() {
        return prefix + "-decide-state";
    }

    String decisions() {
        return prefix + "-decisions";
    }

    String notices() {
        return prefix + "-notices";
    }

    String rejects() {
        return prefix + "-rejects";
    }

    /** The partition of the tallies, and of all that is derived from them, in which an experiment is found. */
    static int partitionOf(String experiment) {
        return KeyPartitions.partitionOf(experiment.getBytes(StandardCharsets.UTF_8), DECIDE_PARTITIONS);
    }

    /** The topics that counting writes to, given the number of input partitions. */
    List<InternalTopic> forCounting(int inputPartitions) {
        return List.of(
                InternalTopic.compacted(countState(), inputPartitions),
                InternalTopic.kept(tallies(), DECIDE_PARTITIONS),
                InternalTopic.expiring(rejects(), inputPartitions, REJECTS_KEPT));
    }

    /** The topics that deciding writes to. */
    List<InternalTopic> forDeciding() {
        return List.of(
                InternalTopic.compacted(decideState(), DECIDE_PARTITIONS),
                InternalTopic.kept(decisions(), DECIDE_PARTITIONS),
                InternalTopic.kept(notices(), DECIDE_PARTITIONS));
    }
}
