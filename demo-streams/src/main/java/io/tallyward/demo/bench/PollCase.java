package io.tallyward.demo.bench;

import io.tallyward.connector.format.EventMapping;
import io.tallyward.connector.format.EventSlotReader;
import io.tallyward.demo.bench.CaseMain.Task;
import io.tallyward.engine.event.EventSlot;
import io.tallyward.engine.plan.PlanNames;
import io.tallyward.service.config.document.BadInputException;
import io.tallyward.service.plan.PlanDirectory;
import java.time.Duration;
import java.util.List;
import java.util.Map;
import org.apache.kafka.clients.consumer.ConsumerRecord;
import org.apache.kafka.clients.consumer.ConsumerRecords;
import org.apache.kafka.clients.consumer.KafkaConsumer;
import org.apache.kafka.common.TopicPartition;
import org.apache.kafka.common.serialization.ByteArrayDeserializer;

/** A consumer, fetching as the monitor does, that looks at nothing or at most reads the events. */
final class PollCase {

    private static final Duration POLL = Duration.ofMillis(100);
    private static final int MAX_EVENT_BYTES = 65_536;

    private PollCase() {}

    static Measurement measure(Task task, boolean parse) throws BadInputException {
        PlanNames names = new PlanNames(PlanDirectory.read(task.plans()).orElseThrow());
        EventSlotReader reader = new EventSlotReader(EventMapping.DEFAULT, MAX_EVENT_BYTES, names);
        EventSlot event = new EventSlot();
        Stopwatch stopwatch = new Stopwatch(task.warmUp());
        long seen = 0;
        try (KafkaConsumer<byte[], byte[]> consumer = new KafkaConsumer<>(
                settings(task.bootstrapServers()), new ByteArrayDeserializer(), new ByteArrayDeserializer())) {
            List<TopicPartition> partitions = consumer.partitionsFor(task.topic()).stream()
                    .map(info -> new TopicPartition(task.topic(), info.partition()))
                    .toList();
            consumer.assign(partitions);
            consumer.seekToBeginning(partitions);
            while (seen < task.events()) {
                ConsumerRecords<byte[], byte[]> records = consumer.poll(POLL);
                for (ConsumerRecord<byte[], byte[]> record : records) {
                    if (parse && !reader.read(record.value(), event)) {
                        throw new IllegalStateException("record " + record.offset() + ": not read as an event");
                    }
                    seen++;
                }
                stopwatch.passed(seen);
            }
            return stopwatch.stop(seen);
        }
    }

    /** Those of the monitor's own consumers, as far as they bear upon speed. */
    private static Map<String, Object> settings(String bootstrapServers) {
        return Map.of(
                "bootstrap.servers", bootstrapServers,
                "isolation.level", "read_committed",
                "enable.auto.commit", false,
                "max.poll.records", 20_000,
                "fetch.min.bytes", 1_048_576,
                "fetch.max.wait.ms", 250,
                "max.partition.fetch.bytes", 4_194_304,
                "receive.buffer.bytes", 1_048_576);
    }
}
