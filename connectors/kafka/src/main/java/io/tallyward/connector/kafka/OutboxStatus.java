package io.tallyward.connector.kafka;

import java.time.Instant;
import java.util.Optional;

/**
 * An outbox reader at one moment.
 *
 * @param state as for a worker; an outbox never restores
 * @param pending notices handed out and not yet done
 * @param oldestPending when the oldest of them was written; empty if none is pending
 * @param delivered notices done since the reader started
 * @param lastError the last sentence about what went wrong, kept after recovery; empty if nothing has
 */
public record OutboxStatus(
        WorkerState state, int pending, Optional<Instant> oldestPending, long delivered, Optional<String> lastError) {}
