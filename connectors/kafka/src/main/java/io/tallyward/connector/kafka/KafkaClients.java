package io.tallyward.connector.kafka;

import java.util.Map;
import java.util.Optional;
import java.util.concurrent.Executor;
import java.util.concurrent.LinkedBlockingQueue;
import java.util.concurrent.ThreadPoolExecutor;
import java.util.concurrent.TimeUnit;
import org.apache.kafka.clients.consumer.Consumer;
import org.apache.kafka.clients.consumer.KafkaConsumer;
import org.apache.kafka.clients.producer.KafkaProducer;
import org.apache.kafka.clients.producer.Producer;
import org.apache.kafka.common.serialization.ByteArrayDeserializer;
import org.apache.kafka.common.serialization.ByteArraySerializer;

/** The real clients of one worker. Not thread-safe. */
final class KafkaClients implements Clients {

    private final ShardGroup group;
    private final int worker;
    private final Executor aside;
    private int outputs;

    KafkaClients(ShardGroup group, int worker) {
        this.group = group;
        this.worker = worker;
        this.aside = aside(group.id() + "-" + worker + "-upkeep");
    }

    /** One thread, which is there only while it has something to do or had some time ago. */
    private static Executor aside(String name) {
        ThreadPoolExecutor executor =
                new ThreadPoolExecutor(1, 1, 1, TimeUnit.MINUTES, new LinkedBlockingQueue<>(), task -> {
                    Thread thread = new Thread(task, name);
                    thread.setDaemon(true);
                    return thread;
                });
        executor.allowCoreThreadTimeOut(true);
        return executor;
    }

    @Override
    public Executor aside() {
        return aside;
    }

    @Override
    public Cluster cluster() {
        return ClientSettings.cluster(group.clientProperties());
    }

    @Override
    public Consumer<byte[], byte[]> input() {
        return consumer(ClientSettings.input(group, worker));
    }

    @Override
    public Consumer<byte[], byte[]> state() {
        return consumer(ClientSettings.state(group, worker));
    }

    @Override
    public Producer<byte[], byte[]> output() {
        outputs++;
        return producer(ClientSettings.output(group, worker, outputs));
    }

    @Override
    public Optional<String> lastTransactionalId() {
        return outputs == 0 ? Optional.empty() : Optional.of(ClientSettings.transactionalId(group, worker, outputs));
    }

    @Override
    public boolean isPredecessor(String transactionalId) {
        return ClientSettings.isPredecessor(group, worker, transactionalId);
    }

    @Override
    public Producer<byte[], byte[]> standIn(String transactionalId) {
        return producer(ClientSettings.output(group, worker, transactionalId));
    }

    private static Producer<byte[], byte[]> producer(Map<String, Object> settings) {
        return new KafkaProducer<>(settings, new ByteArraySerializer(), new ByteArraySerializer());
    }

    private static Consumer<byte[], byte[]> consumer(Map<String, Object> settings) {
        return new KafkaConsumer<>(settings, new ByteArrayDeserializer(), new ByteArrayDeserializer());
    }
}
