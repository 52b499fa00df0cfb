package io.tallyward.connector.kafka;

import org.apache.kafka.clients.consumer.Consumer;
import org.apache.kafka.clients.producer.Producer;

/** Makes the clients of one worker; each call makes a new one, which belongs to the caller. */
interface Clients {

    Cluster cluster();

    /** Reads the input topics as a member of the group. */
    Consumer<byte[], byte[]> input();

    /** Reads committed state, outside any group. */
    Consumer<byte[], byte[]> state();

    /** Writes in transactions, always under the same transactional id. */
    Producer<byte[], byte[]> output();
}
