package io.tallyward.demo.bench;

import java.util.ArrayList;
import java.util.List;
import java.util.Map;
import java.util.concurrent.TimeUnit;
import java.util.concurrent.atomic.AtomicReference;
import org.apache.kafka.clients.producer.KafkaProducer;
import org.apache.kafka.clients.producer.ProducerConfig;
import org.apache.kafka.clients.producer.ProducerRecord;
import org.apache.kafka.common.serialization.ByteArraySerializer;

/** Sends events at an even pace on a thread of its own, and keeps when each was sent. */
final class SteadySender implements AutoCloseable {

    private static final double NANOS_PER_SECOND = 1e9;
    private static final long STOP_MILLIS = 10_000;

    private final String topic;
    private final Traffic traffic;
    private final long perSecond;
    private final long first;
    private final long most;
    private final List<SentTimes> times = new ArrayList<>();
    private final AtomicReference<Exception> failure = new AtomicReference<>();
    private final KafkaProducer<byte[], byte[]> producer;
    private final Thread thread = new Thread(this::send, "steady-sender");
    private volatile boolean stopped;

    /**
     * What to send.
     *
     * @param first number of the first event
     * @param most how many events; fewer if it is stopped
     * @param perSecond events per second
     */
    record Pace(long first, long most, long perSecond) {}

    private SteadySender(String bootstrapServers, String topic, int partitions, Traffic traffic, Pace pace) {
        this.topic = topic;
        this.traffic = traffic;
        first = pace.first();
        most = pace.most();
        perSecond = pace.perSecond();
        for (int partition = 0; partition < partitions; partition++) {
            times.add(new SentTimes());
        }
        producer = new KafkaProducer<>(
                Map.of(ProducerConfig.BOOTSTRAP_SERVERS_CONFIG, bootstrapServers, ProducerConfig.LINGER_MS_CONFIG, 0),
                new ByteArraySerializer(),
                new ByteArraySerializer());
        thread.setDaemon(true);
    }

    static SteadySender start(String bootstrapServers, String topic, int partitions, Traffic traffic, Pace pace) {
        SteadySender sender = new SteadySender(bootstrapServers, topic, partitions, traffic, pace);
        sender.thread.start();
        return sender;
    }

    private void send() {
        try {
            producer.partitionsFor(topic);
            long began = System.nanoTime();
            long sent = 0;
            while (!stopped && sent < most) {
                long due = (long) ((System.nanoTime() - began) / NANOS_PER_SECOND * perSecond);
                for (; sent < Math.min(due, most); sent++) {
                    send(traffic.event(first + sent));
                }
                TimeUnit.MILLISECONDS.sleep(1);
            }
            producer.flush();
        } catch (InterruptedException | RuntimeException problem) {
            failure.compareAndSet(null, problem);
        }
    }

    private void send(Traffic.Sent event) {
        long now = System.nanoTime();
        producer.send(
                new ProducerRecord<>(topic, null, event.atMillis(), event.key(), event.value()),
                (metadata, problem) -> {
                    if (problem == null) {
                        times.get(metadata.partition()).add(now);
                    } else {
                        failure.compareAndSet(null, problem);
                    }
                });
    }

    /** Whether all is sent; what the broker has not confirmed yet is not. */
    boolean isDone() {
        return !thread.isAlive();
    }

    /** When the records of a partition that the broker has were sent. */
    SentTimes times(int partition) {
        return times.get(partition);
    }

    /** @throws IllegalStateException when a record could not be delivered */
    void requireDelivery() {
        if (failure.get() != null) {
            throw new IllegalStateException(
                    "topic " + topic + ": a record was not delivered (did the broker end?)", failure.get());
        }
    }

    /** Stops after what is due, and waits until the broker has it. */
    void finish() throws InterruptedException {
        stopped = true;
        thread.join(STOP_MILLIS);
        requireDelivery();
    }

    @Override
    public void close() {
        stopped = true;
        producer.close();
    }
}
