package io.tallyward.connector.kafka;

import org.apache.kafka.clients.consumer.Consumer;

/** Makes the clients of one outbox reader; each call makes a new one, which belongs to the caller. */
interface OutboxClients {

    Cluster cluster();

    Consumer<byte[], byte[]> notices();
}
