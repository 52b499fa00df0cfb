package io.tallyward.connector.kafka;

import java.util.HashMap;
import java.util.List;
import java.util.Map;
import java.util.Set;
import org.apache.kafka.clients.consumer.Consumer;
import org.apache.kafka.clients.consumer.OffsetAndTimestamp;
import org.apache.kafka.common.TopicPartition;

/** Turns a start position into offsets. */
record StartOffsets(Consumer<byte[], byte[]> consumer, StartPosition start) {

    /** Where to begin in each partition. */
    Map<TopicPartition, Long> of(Set<TopicPartition> partitions) {
        if (partitions.isEmpty()) {
            return Map.of();
        }
        if (start instanceof StartPosition.At at) {
            return byTime(partitions, at.instant().toEpochMilli());
        }
        return start instanceof StartPosition.Latest
                ? consumer.endOffsets(partitions)
                : consumer.beginningOffsets(partitions);
    }

    private Map<TopicPartition, Long> byTime(Set<TopicPartition> partitions, long millis) {
        Map<TopicPartition, Long> wanted = new HashMap<>();
        partitions.forEach(partition -> wanted.put(partition, millis));
        Map<TopicPartition, OffsetAndTimestamp> found = consumer.offsetsForTimes(wanted);
        Map<TopicPartition, Long> offsets = new HashMap<>();
        for (TopicPartition partition : partitions) {
            OffsetAndTimestamp first = found.get(partition);
            offsets.put(partition, first == null ? end(partition) : first.offset());
        }
        return offsets;
    }

    private long end(TopicPartition partition) {
        return consumer.endOffsets(List.of(partition)).get(partition);
    }
}
