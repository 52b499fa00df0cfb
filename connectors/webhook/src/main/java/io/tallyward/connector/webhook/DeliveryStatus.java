package io.tallyward.connector.webhook;

import io.tallyward.engine.record.Notice;
import java.time.Instant;
import java.util.List;
import java.util.Optional;

/**
 * How deliveries stand: an immutable snapshot. Counters start at zero with the process.
 *
 * @param delivered how many notices were delivered
 * @param failedAttempts how many attempts failed
 * @param pending how many notices wait for their next attempt
 * @param oldestPending when the oldest of them was submitted; empty when none waits
 * @param parkedTotal how many notices were given up
 * @param parked the newest of these, oldest first, at most {@value #MAX_PARKED}
 * @param failing whether the latest attempt failed
 * @param disabled whether the receiver asked for nothing more; final
 * @param lastError what the latest failure said; empty when there was none
 */
public record DeliveryStatus(
        long delivered,
        long failedAttempts,
        int pending,
        Optional<Instant> oldestPending,
        long parkedTotal,
        List<Parked> parked,
        boolean failing,
        boolean disabled,
        String lastError) {

    static final int MAX_PARKED = 100;

    public DeliveryStatus {
        parked = List.copyOf(parked);
    }

    /**
     * A notice that was given up.
     *
     * @param id its identity
     * @param kind what it was about
     * @param experiment the experiment it was about
     * @param lastError why it was given up
     */
    public record Parked(String id, Notice.Kind kind, String experiment, String lastError) {}
}
