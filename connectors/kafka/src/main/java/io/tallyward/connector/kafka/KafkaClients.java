package io.tallyward.connector.kafka;

import org.apache.kafka.clients.consumer.Consumer;
import org.apache.kafka.clients.consumer.KafkaConsumer;
import org.apache.kafka.clients.producer.KafkaProducer;
import org.apache.kafka.clients.producer.Producer;
import org.apache.kafka.common.serialization.ByteArrayDeserializer;
import org.apache.kafka.common.serialization.ByteArraySerializer;

/** The real clients of one worker. */
record KafkaClients(ShardGroup group, int worker) implements Clients {

    @Override
    public Cluster cluster() {
        return ClientSettings.cluster(group.clientProperties());
    }

    @Override
    public Consumer<byte[], byte[]> input() {
        return new KafkaConsumer<>(
                ClientSettings.input(group, worker), new ByteArrayDeserializer(), new ByteArrayDeserializer());
    }

    @Override
    public Consumer<byte[], byte[]> state() {
        return new KafkaConsumer<>(
                ClientSettings.state(group, worker), new ByteArrayDeserializer(), new ByteArrayDeserializer());
    }

    @Override
    public Producer<byte[], byte[]> output() {
        return new KafkaProducer<>(
                ClientSettings.output(group, worker), new ByteArraySerializer(), new ByteArraySerializer());
    }
}
