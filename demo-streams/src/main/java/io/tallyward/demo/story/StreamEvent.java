package io.tallyward.demo.story;

/**
 * One record of the stream, with what its teller knows about it.
 *
 * @param subject who sees what
 * @param kind view or click
 * @param id identifier of the event; unique but for exact duplicates; written as sixteen hexadecimal digits, so that the
 *     order of the texts is the unsigned order of the numbers
 * @param viewId for a click, the view it belongs to; 0 when there is none to name
 * @param atMillis event time
 * @param receivedMillis when the record reaches the pipeline; becomes the record's timestamp
 * @param late whether it is delivered so long after its event time that every window it could have changed is sealed;
 *     all other events are delivered well within grace
 * @param flaw why it must be rejected
 */
public record StreamEvent(
        Subject subject, Kind kind, long id, long viewId, long atMillis, long receivedMillis, boolean late, Flaw flaw) {

    /** The two kinds of event. */
    public enum Kind {
        VIEW,
        CLICK
    }

    public boolean isView() {
        return kind == Kind.VIEW;
    }

    /** The same event, delivered once more. */
    StreamEvent again(long laterReceivedMillis, boolean againLate) {
        return new StreamEvent(subject, kind, id, viewId, atMillis, laterReceivedMillis, late || againLate, flaw);
    }
}
