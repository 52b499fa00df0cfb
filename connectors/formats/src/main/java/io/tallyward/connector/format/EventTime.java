package io.tallyward.connector.format;

import com.fasterxml.jackson.core.JsonToken;

/** Event times as JSON has them: RFC 3339 text, or whole milliseconds since the epoch. */
final class EventTime {

    private static final int LONGEST_EPOCH_MILLIS = 15;

    private EventTime() {}

    /** Milliseconds since the epoch, or {@link Rfc3339#UNREADABLE}, also for times outside the years 0000 to 9999. */
    static long millis(JsonToken token, char[] text, int from, int length) {
        long millis = Rfc3339.UNREADABLE;
        if (token == JsonToken.VALUE_STRING) {
            millis = Rfc3339.millis(text, from, length);
        } else if (token == JsonToken.VALUE_NUMBER_INT && length <= LONGEST_EPOCH_MILLIS) {
            millis = whole(text, from, length);
        }
        return millis >= Rfc3339.EARLIEST_MILLIS && millis <= Rfc3339.LATEST_MILLIS ? millis : Rfc3339.UNREADABLE;
    }

    private static long whole(char[] text, int from, int length) {
        boolean negative = text[from] == '-';
        long value = 0;
        for (int i = from + (negative ? 1 : 0); i < from + length; i++) {
            value = 10 * value + (text[i] - '0');
        }
        return negative ? -value : value;
    }
}
