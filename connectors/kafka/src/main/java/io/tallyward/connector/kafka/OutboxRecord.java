package io.tallyward.connector.kafka;

/**
 * A notice on its way out. Thread-safe.
 */
public interface OutboxRecord {

    int partition();

    long offset();

    /** When the notice was written, in milliseconds since 1970. */
    long timestampMillis();

    /** May be null. */
    byte[] key();

    byte[] value();

    /**
     * Whether this instance is still the one to deliver it. Once the partition has moved to another instance, that one
     * delivers the notice as well, and further attempts from here only add duplicates.
     */
    boolean wanted();

    /** Delivered, or given up visibly: it need not be handed out again. Later calls do nothing. */
    void done();
}
