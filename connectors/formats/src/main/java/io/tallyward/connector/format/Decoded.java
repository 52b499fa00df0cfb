package io.tallyward.connector.format;

import io.tallyward.engine.event.Event;
import io.tallyward.engine.event.RejectReason;
import java.util.OptionalLong;

/** What became of a record's bytes: an event, or the reason why there is none. */
public sealed interface Decoded {

    /**
     * The bytes are an event. Whether it counts is not decided here.
     *
     * @param event the event
     * @param receivedMillis when the pipeline received it, milliseconds since the epoch; empty when the document does not say
     */
    record Accepted(Event event, OptionalLong receivedMillis) implements Decoded {}

    /**
     * The bytes are no event.
     *
     * @param reason the kind of trouble
     * @param detail one sentence for people: which field, what was found, what was expected; printable ASCII, at most
     *     {@value Quoted#MAX_DETAIL} characters, and never the identifier of a unit
     */
    record Refused(RejectReason reason, String detail) implements Decoded {}
}
