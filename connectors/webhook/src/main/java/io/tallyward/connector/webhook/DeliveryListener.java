package io.tallyward.connector.webhook;

import io.tallyward.engine.record.Notice;

/**
 * Hears what becomes of deliveries, for metrics. Called on the sending thread, so it must be quick; what it throws is
 * logged and otherwise ignored.
 */
public interface DeliveryListener {

    /** Hears nothing. */
    DeliveryListener NONE = new DeliveryListener() {};

    /** An attempt came to an end, whichever. */
    default void attempted(Notice notice, AttemptResult result) {}

    /** A notice was delivered. */
    default void delivered(Notice notice) {}

    /** A notice was given up. */
    default void parked(Notice notice, String lastError) {}
}
