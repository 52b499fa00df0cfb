package io.tallyward.demo.bench;

import java.util.HashMap;
import java.util.Map;
import java.util.concurrent.atomic.AtomicReference;
import org.apache.kafka.clients.producer.KafkaProducer;
import org.apache.kafka.clients.producer.ProducerConfig;
import org.apache.kafka.clients.producer.ProducerRecord;
import org.apache.kafka.common.serialization.ByteArraySerializer;

/** Fills the topic that all cases read. */
final class TrafficSender {

    /** The longest that the embedded broker allows. */
    private static final int LONGEST_TRANSACTION_MILLIS = 60_000;

    private TrafficSender() {}

    /**
     * Sends events, keyed by unit and not compressed, and waits until the broker has them.
     *
     * @return bytes of all values together
     * @throws IllegalStateException when a record cannot be delivered
     */
    static long send(String bootstrapServers, String topic, Traffic traffic, long events) {
        try (KafkaProducer<byte[], byte[]> producer = producer(bootstrapServers, Map.of())) {
            return send(producer, topic, traffic, 0, events);
        }
    }

    /**
     * Sends events in one transaction: who reads committed records only, as the monitor does, may read them from the moment
     * this returns.
     *
     * @param first number of the first event
     * @throws IllegalStateException when a record cannot be delivered
     * @throws org.apache.kafka.common.KafkaException when sending takes longer than a minute
     */
    static void sendAtOnce(String bootstrapServers, String topic, Traffic traffic, long first, long events) {
        Map<String, Object> transactional = Map.of(
                ProducerConfig.TRANSACTIONAL_ID_CONFIG,
                topic + "-sender",
                ProducerConfig.TRANSACTION_TIMEOUT_CONFIG,
                LONGEST_TRANSACTION_MILLIS);
        try (KafkaProducer<byte[], byte[]> producer = producer(bootstrapServers, transactional)) {
            producer.initTransactions();
            producer.beginTransaction();
            send(producer, topic, traffic, first, events);
            producer.commitTransaction();
        }
    }

    private static KafkaProducer<byte[], byte[]> producer(String bootstrapServers, Map<String, Object> further) {
        Map<String, Object> properties = new HashMap<>(further);
        properties.put(ProducerConfig.BOOTSTRAP_SERVERS_CONFIG, bootstrapServers);
        properties.put(ProducerConfig.ENABLE_IDEMPOTENCE_CONFIG, true);
        properties.put(ProducerConfig.MAX_IN_FLIGHT_REQUESTS_PER_CONNECTION, 1);
        properties.put(ProducerConfig.LINGER_MS_CONFIG, 50);
        properties.put(ProducerConfig.BATCH_SIZE_CONFIG, 262_144);
        return new KafkaProducer<>(properties, new ByteArraySerializer(), new ByteArraySerializer());
    }

    private static long send(
            KafkaProducer<byte[], byte[]> producer, String topic, Traffic traffic, long first, long events) {
        AtomicReference<Exception> failure = new AtomicReference<>();
        long bytes = 0;
        for (long number = first; number < first + events && failure.get() == null; number++) {
            Traffic.Sent event = traffic.event(number);
            bytes += event.value().length;
            producer.send(
                    new ProducerRecord<>(topic, null, event.atMillis(), event.key(), event.value()),
                    (metadata, problem) -> failure.compareAndSet(null, problem));
        }
        producer.flush();
        if (failure.get() != null) {
            throw new IllegalStateException(
                    "topic " + topic + ": a record was not delivered (is there room on the disk?)", failure.get());
        }
        return bytes;
    }
}
