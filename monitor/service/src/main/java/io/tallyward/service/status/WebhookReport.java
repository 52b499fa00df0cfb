package io.tallyward.service.status;

import java.util.Objects;
import java.util.OptionalDouble;

/**
 * How the delivery of notices stands.
 *
 * @param attempts requests sent since the process started
 * @param failures those of them that did not succeed
 * @param pending notices not yet delivered
 * @param oldestAgeSeconds age of the oldest of them; empty when none is pending
 * @param parked notices that were given up and wait for a person
 */
public record WebhookReport(long attempts, long failures, long pending, OptionalDouble oldestAgeSeconds, long parked) {

    public WebhookReport {
        Objects.requireNonNull(oldestAgeSeconds, "oldestAgeSeconds");
    }
}
