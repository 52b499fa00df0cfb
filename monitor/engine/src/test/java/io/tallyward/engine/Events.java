package io.tallyward.engine;

import io.tallyward.engine.event.Event;
import io.tallyward.engine.event.EventKind;
import java.util.HashMap;
import java.util.Map;

/** Builds events, timed in minutes from the start of the run. */
public final class Events {

    private static final double MILLIS_PER_MINUTE = 60_000;

    private Events() {}

    /** Event time of a moment of the run; fractions of a minute are exact to the millisecond. */
    public static long at(double minute) {
        return Plans.FROM.toEpochMilli() + Math.round(minute * MILLIS_PER_MINUTE);
    }

    public static Event view(String experiment, String variant, String unit, String id, double minute) {
        return event(EventKind.VIEW, experiment, variant, unit, id, at(minute));
    }

    public static Event click(String experiment, String variant, String unit, String id, double minute) {
        return event(EventKind.CLICK, experiment, variant, unit, id, at(minute));
    }

    /** The same event with segments: names and values in turn. */
    public static Event with(Event event, String... namesAndValues) {
        Map<String, String> segments = new HashMap<>();
        for (int i = 0; i < namesAndValues.length; i += 2) {
            segments.put(namesAndValues[i], namesAndValues[i + 1]);
        }
        return new Event(
                event.kind(),
                event.experiment(),
                event.variant(),
                event.unit(),
                event.source(),
                event.id(),
                event.atMillis(),
                event.viewId(),
                segments);
    }

    public static Event event(
            EventKind kind, String experiment, String variant, String unit, String id, long atMillis) {
        return new Event(kind, experiment, variant, unit, "northwater-web", id, atMillis, "", Map.of());
    }
}
