package io.tallyward.demo.bench;

import java.util.Map;
import java.util.concurrent.atomic.AtomicReference;
import org.apache.kafka.clients.producer.KafkaProducer;
import org.apache.kafka.clients.producer.ProducerConfig;
import org.apache.kafka.clients.producer.ProducerRecord;
import org.apache.kafka.common.serialization.ByteArraySerializer;

/** Fills the topic that all cases read. */
final class TrafficSender {

    private TrafficSender() {}

    /**
     * Sends events, keyed by unit and not compressed, and waits until the broker has them.
     *
     * @return bytes of all values together
     * @throws IllegalStateException when a record cannot be delivered
     */
    static long send(String bootstrapServers, String topic, long events) {
        Map<String, Object> properties = Map.of(
                ProducerConfig.BOOTSTRAP_SERVERS_CONFIG,
                bootstrapServers,
                ProducerConfig.ENABLE_IDEMPOTENCE_CONFIG,
                true,
                ProducerConfig.LINGER_MS_CONFIG,
                50,
                ProducerConfig.BATCH_SIZE_CONFIG,
                262_144);
        AtomicReference<Exception> failure = new AtomicReference<>();
        long bytes = 0;
        try (KafkaProducer<byte[], byte[]> producer =
                new KafkaProducer<>(properties, new ByteArraySerializer(), new ByteArraySerializer())) {
            for (long number = 0; number < events && failure.get() == null; number++) {
                Traffic.Sent event = Traffic.event(number);
                bytes += event.value().length;
                producer.send(
                        new ProducerRecord<>(topic, null, event.atMillis(), event.key(), event.value()),
                        (metadata, problem) -> failure.compareAndSet(null, problem));
            }
            producer.flush();
        }
        if (failure.get() != null) {
            throw new IllegalStateException(
                    "topic " + topic + ": a record was not delivered (is there room on the disk?)", failure.get());
        }
        return bytes;
    }
}
