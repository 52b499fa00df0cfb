package io.tallyward.service.watch;

import io.tallyward.engine.event.Event;
import io.tallyward.engine.event.RejectReason;
import java.time.Instant;

/** Says in words why a well-formed event was not admitted. Never names the unit. */
final class RejectDetail {

    private RejectDetail() {}

    static String of(RejectReason reason, Event event, long recordTimestampMillis) {
        return switch (reason) {
            case UNKNOWN_EXPERIMENT -> "no plan is named " + event.experiment();
            case UNKNOWN_VARIANT -> "the plan of " + event.experiment() + " has no variant " + event.variant();
            case BAD_TIME ->
                "event time " + Instant.ofEpochMilli(event.atMillis())
                        + " lies ahead of the record's timestamp " + Instant.ofEpochMilli(recordTimestampMillis)
                        + " by more than input.max-skew";
            case UNPARSABLE, MISSING_FIELD, OVERSIZED -> reason.code();
        };
    }
}
