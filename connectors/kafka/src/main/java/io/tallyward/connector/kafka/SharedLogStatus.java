package io.tallyward.connector.kafka;

import java.time.Instant;
import java.util.Optional;

/**
 * How a shared log fares.
 *
 * @param state {@link WorkerState#STARTING} until everything has been read once
 * @param confirmed when it was last known that everything written had been read; empty before the first time
 * @param lastError what went wrong last, as a sentence; empty if nothing did
 */
public record SharedLogStatus(WorkerState state, Optional<Instant> confirmed, Optional<String> lastError) {}
