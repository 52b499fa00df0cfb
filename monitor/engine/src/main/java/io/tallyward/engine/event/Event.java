package io.tallyward.engine.event;

import java.util.Map;
import java.util.Objects;

/**
 * One view or click.
 *
 * @param kind what happened
 * @param experiment name of the experiment
 * @param variant name of the variant the unit was shown or clicked
 * @param unit identifier of the randomised unit (a visitor, an account); never leaves the process except as a keyed hash
 * @param source the emitter of the event, empty when the stream names none; together with {@code id} it names the event
 * @param id identifier of the event within its source
 * @param atMillis event time, milliseconds since the epoch
 * @param viewId for a click, the id of the view that was clicked; empty when the stream does not say
 * @param segments low-cardinality fields such as the platform, by name
 */
public record Event(
        EventKind kind,
        String experiment,
        String variant,
        String unit,
        String source,
        String id,
        long atMillis,
        String viewId,
        Map<String, String> segments) {

    public Event {
        Objects.requireNonNull(kind, "kind");
        requireText("experiment", experiment);
        requireText("variant", variant);
        requireText("unit", unit);
        Objects.requireNonNull(source, "source");
        requireText("id", id);
        Objects.requireNonNull(viewId, "viewId");
        segments = Map.copyOf(segments);
    }

    private static void requireText(String name, String value) {
        if (value == null || value.isEmpty()) {
            throw new IllegalArgumentException(name + ": empty (expected: text)");
        }
    }
}
