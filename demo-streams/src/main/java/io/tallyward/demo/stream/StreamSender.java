package io.tallyward.demo.stream;

import io.tallyward.demo.story.StreamEvent;
import java.nio.charset.StandardCharsets;
import java.time.Duration;
import java.util.Map;
import java.util.concurrent.atomic.AtomicReference;
import java.util.concurrent.locks.LockSupport;
import org.apache.kafka.clients.producer.KafkaProducer;
import org.apache.kafka.clients.producer.Producer;
import org.apache.kafka.clients.producer.ProducerConfig;
import org.apache.kafka.clients.producer.ProducerRecord;
import org.apache.kafka.common.serialization.ByteArraySerializer;

/**
 * Sends the stream to a topic. Records go out in the order of arrival, keyed by unit, so that Kafka's own partitioner
 * keeps each unit in one partition and in order.
 */
public final class StreamSender implements AutoCloseable {

    /** Shorter waits are not worth a system call; the stream is then at most this much ahead. */
    private static final long LEAST_WAIT_NANOS = 2_000_000;

    private static final Duration CLOSE_PATIENCE = Duration.ofSeconds(5);

    private final Producer<byte[], byte[]> producer;
    private final String topic;
    private final AtomicReference<Exception> failure = new AtomicReference<>();
    private boolean complete;

    /** Is told after every event how many have been sent. */
    @FunctionalInterface
    public interface Progress {
        void sent(StreamEvent event, long count);
    }

    StreamSender(Producer<byte[], byte[]> producer, String topic) {
        this.producer = producer;
        this.topic = topic;
    }

    /**
     * A sender to a broker; every record is acknowledged and none is duplicated by a retry. One request at a time, because a
     * broker that was killed remembers only the last batch of a producer: it would refuse an earlier one that is sent again,
     * although it has it, and the producer would try in vain until it gives up.
     */
    public static StreamSender to(String bootstrapServers, String topic) {
        Map<String, Object> properties = Map.of(
                ProducerConfig.BOOTSTRAP_SERVERS_CONFIG,
                bootstrapServers,
                ProducerConfig.ENABLE_IDEMPOTENCE_CONFIG,
                true,
                ProducerConfig.ACKS_CONFIG,
                "all",
                ProducerConfig.MAX_IN_FLIGHT_REQUESTS_PER_CONNECTION,
                1,
                ProducerConfig.LINGER_MS_CONFIG,
                20,
                ProducerConfig.BATCH_SIZE_CONFIG,
                65_536,
                ProducerConfig.CLIENT_ID_CONFIG,
                "northwater-page");
        return new StreamSender(
                new KafkaProducer<>(properties, new ByteArraySerializer(), new ByteArraySerializer()), topic);
    }

    /**
     * Sends all events and waits until the broker has them.
     *
     * @throws IllegalStateException when a record cannot be delivered or the thread is interrupted
     */
    public void send(Iterable<StreamEvent> events, Pace pace, Progress progress) {
        long count = 0;
        for (StreamEvent event : events) {
            await(pace, event);
            byte[] key = event.subject().unit().getBytes(StandardCharsets.UTF_8);
            producer.send(
                    new ProducerRecord<>(topic, null, event.receivedMillis(), key, EventJson.record(event)),
                    (metadata, problem) -> {
                        if (problem != null) {
                            failure.compareAndSet(null, problem);
                        }
                    });
            failIfRefused();
            progress.sent(event, ++count);
        }
        producer.flush();
        failIfRefused();
        complete = true;
    }

    /** Closes the connection; of a stream that was not sent to its end, records under way are given up. */
    @Override
    public void close() {
        boolean interrupted = Thread.interrupted();
        try {
            producer.close(complete ? CLOSE_PATIENCE : Duration.ZERO);
        } finally {
            if (interrupted) {
                Thread.currentThread().interrupt();
            }
        }
    }

    private void await(Pace pace, StreamEvent event) {
        long wait = pace.waitNanos(event.receivedMillis());
        while (wait > LEAST_WAIT_NANOS && !Thread.currentThread().isInterrupted()) {
            LockSupport.parkNanos(wait);
            wait = pace.waitNanos(event.receivedMillis());
        }
        if (Thread.currentThread().isInterrupted()) {
            throw new IllegalStateException("sending to " + topic + " was interrupted");
        }
    }

    private void failIfRefused() {
        Exception problem = failure.get();
        if (problem != null) {
            throw new IllegalStateException(
                    "topic " + topic + ": a record was not delivered (is the broker still running?)", problem);
        }
    }
}
