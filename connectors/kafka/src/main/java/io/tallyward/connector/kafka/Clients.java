package io.tallyward.connector.kafka;

import java.util.Optional;
import java.util.concurrent.Executor;
import org.apache.kafka.clients.consumer.Consumer;
import org.apache.kafka.clients.producer.Producer;

/** Makes the clients of one worker; each call makes a new one, which belongs to the caller. */
interface Clients {

    Cluster cluster();

    /** Runs what may take seconds beside the worker's thread, one thing at a time. */
    Executor aside();

    /** Reads the input topics as a member of the group. */
    Consumer<byte[], byte[]> input();

    /** Reads committed state, outside any group. */
    Consumer<byte[], byte[]> state();

    /** Writes in transactions, under a transactional id that was never used before. */
    Producer<byte[], byte[]> output();

    /** The transactional id of the producer that {@link #output()} made last; empty before the first. */
    Optional<String> lastTransactionalId();

    /** Whether a transactional id was used by whoever has been replaced by this worker under a name that is kept. */
    boolean isPredecessor(String transactionalId);

    /**
     * Stands in for a producer that was made earlier, by this worker or another, under its transactional id: for ending what
     * that one has left open and for nothing else.
     */
    Producer<byte[], byte[]> standIn(String transactionalId);
}
