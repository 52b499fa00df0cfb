package io.tallyward.connector.kafka;

import java.util.Map;
import org.apache.kafka.clients.consumer.Consumer;
import org.apache.kafka.clients.consumer.KafkaConsumer;
import org.apache.kafka.clients.producer.KafkaProducer;
import org.apache.kafka.clients.producer.Producer;
import org.apache.kafka.common.serialization.ByteArrayDeserializer;
import org.apache.kafka.common.serialization.ByteArraySerializer;

/**
 * The real clients of a shared log.
 *
 * @param clientProperties the operator's, {@code bootstrap.servers} among them
 * @param name part of the client ids
 */
record KafkaSharedLogClients(Map<String, String> clientProperties, String name) implements SharedLogClients {

    @Override
    public Cluster cluster() {
        return ClientSettings.cluster(clientProperties);
    }

    @Override
    public Consumer<byte[], byte[]> reader() {
        return new KafkaConsumer<>(
                ClientSettings.logReader(clientProperties, name),
                new ByteArrayDeserializer(),
                new ByteArrayDeserializer());
    }

    @Override
    public Producer<byte[], byte[]> writer() {
        return new KafkaProducer<>(
                ClientSettings.logWriter(clientProperties, name), new ByteArraySerializer(), new ByteArraySerializer());
    }
}
