package io.tallyward.connector.kafka;

import org.apache.kafka.clients.consumer.Consumer;
import org.apache.kafka.clients.producer.Producer;

/** Makes the clients of a shared log. */
interface SharedLogClients {

    Cluster cluster();

    Consumer<byte[], byte[]> reader();

    Producer<byte[], byte[]> writer();
}
