package io.tallyward.service.watch;

import io.tallyward.connector.format.Quoted;
import io.tallyward.engine.event.Event;
import io.tallyward.engine.event.RejectReason;
import java.time.Instant;

/** Says in words why a well-formed event was not admitted. Never names the unit. */
final class RejectDetail {

    private RejectDetail() {}

    static String of(RejectReason reason, Event event, long recordTimestampMillis) {
        return switch (reason) {
            case UNKNOWN_EXPERIMENT -> "no plan is named " + shown(event.experiment(), event);
            case UNKNOWN_VARIANT ->
                "the plan of " + event.experiment() + " has no variant " + shown(event.variant(), event);
            case BAD_TIME ->
                "event time " + Instant.ofEpochMilli(event.atMillis())
                        + " lies ahead of the record's timestamp " + Instant.ofEpochMilli(recordTimestampMillis)
                        + " by more than input.max-skew";
            case UNPARSABLE, MISSING_FIELD, OVERSIZED -> reason.code();
        };
    }

    /** Foreign text, unless it gives the unit away: a wrong mapping may lead to it under another field's name. */
    private static String shown(String text, Event event) {
        return text.contains(event.unit()) ? "a value like the unit" : Quoted.of(text);
    }
}
