package io.tallyward.demo.stream;

import io.tallyward.demo.story.Flaw;
import io.tallyward.demo.story.StreamEvent;
import java.nio.charset.StandardCharsets;
import java.time.Instant;
import java.util.HexFormat;

/**
 * Renders an event as the JSON text that Northwater's page would send. Every text in it is ASCII without quotes or
 * backslashes, so that nothing needs escaping.
 */
public final class EventJson {

    /** Padding of a record that is too large: more than 64 KiB. */
    private static final int TOO_LARGE_CHARACTERS = 70_000;

    private static final HexFormat HEX = HexFormat.of();

    private EventJson() {}

    /** The value of the event's record. */
    public static byte[] record(StreamEvent event) {
        return render(event, false).getBytes(StandardCharsets.UTF_8);
    }

    /** The event as one line of a file, with the moment of arrival as a further member; without a line end. */
    public static String line(StreamEvent event) {
        return render(event, true);
    }

    private static String render(StreamEvent event, boolean withArrival) {
        StringBuilder json = new StringBuilder(256);
        json.append("{\"kind\":\"").append(event.isView() ? "view" : "click");
        member(json, "experiment", event.subject().experiment());
        member(json, "variant", event.subject().variant());
        if (event.flaw() != Flaw.NO_UNIT) {
            member(json, "unit", event.subject().unit());
        }
        member(json, "id", HEX.toHexDigits(event.id()));
        member(
                json,
                "at",
                event.flaw() == Flaw.UNREADABLE_TIME
                        ? "half past nine"
                        : Instant.ofEpochMilli(event.atMillis()).toString());
        member(json, "source", event.subject().device().source());
        if (event.viewId() != 0) {
            member(json, "view", HEX.toHexDigits(event.viewId()));
        }
        if (event.flaw() == Flaw.TOO_LARGE) {
            member(json, "note", "x".repeat(TOO_LARGE_CHARACTERS));
        }
        if (withArrival) {
            member(
                    json,
                    "received",
                    Instant.ofEpochMilli(event.receivedMillis()).toString());
        }
        json.append("\",\"segments\":{\"platform\":\"")
                .append(event.subject().device().platform());
        if (event.flaw() == Flaw.CUT_OFF) {
            return json.toString();
        }
        member(json, "version", event.subject().device().version());
        return json.append("\"}}").toString();
    }

    /** Closes the previous member and opens the next; its value stays open for the one after. */
    private static void member(StringBuilder json, String name, String value) {
        json.append("\",\"").append(name).append("\":\"").append(value);
    }
}
