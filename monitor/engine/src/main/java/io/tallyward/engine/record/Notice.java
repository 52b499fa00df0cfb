package io.tallyward.engine.record;

import java.time.Instant;
import java.util.Collections;
import java.util.LinkedHashMap;
import java.util.Locale;
import java.util.Map;

/**
 * Something people are told.
 *
 * @param id stable identity, derived from the decision and never from the attempt to deliver it; letters, digits and
 *     underscores, at most 64 characters
 * @param kind what it is about
 * @param severity how urgent it is
 * @param experiment the experiment it is about
 * @param variant the variant it is about; empty when it concerns the experiment as a whole
 * @param at event time of the decision: the end of the window that led to it
 * @param summary what happened, in one sentence
 * @param facts how sure we are: named figures, in the order to show them
 * @param action what to do, in one sentence
 * @param decision digest of the decision record that stands behind it
 */
public record Notice(
        String id,
        Kind kind,
        Severity severity,
        String experiment,
        String variant,
        Instant at,
        String summary,
        Map<String, String> facts,
        String action,
        String decision) {

    public Notice {
        facts = Collections.unmodifiableMap(new LinkedHashMap<>(facts));
    }

    /** What a notice is about. The codes are published and stable. */
    public enum Kind {
        /** A boundary was crossed: benefit, harm or futility. */
        STOP,
        /** The observed split contradicts the plan. */
        MISMATCH,
        /** A variant or the stream is silent. */
        STARVED,
        /** Too many crossovers. */
        CROSSOVER,
        /** Orphans are more frequent under one variant. */
        ORPHANS,
        /** Too many late events. */
        LATE,
        /** A change of a frozen plan was refused; the frozen plan stands. */
        PLAN_REFUSED,
        /** Planned information or time is used up without a crossing. */
        EXHAUSTED,
        /** Trust has returned. */
        RECOVERED;

        /** The published code, as in {@code mismatch}. */
        public String code() {
            return name().toLowerCase(Locale.ROOT).replace('_', '-');
        }
    }

    /** How urgent a notice is. */
    public enum Severity {
        /** Wake somebody. */
        PAGE,
        /** Look at it on the next working day. */
        TICKET,
        /** Good to know. */
        INFO;

        /** The published code, as in {@code page}. */
        public String code() {
            return name().toLowerCase(Locale.ROOT);
        }
    }
}
