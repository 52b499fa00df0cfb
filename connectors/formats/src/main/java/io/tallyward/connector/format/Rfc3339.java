package io.tallyward.connector.format;

/**
 * Reads RFC 3339 date-times (section 5.6) without allocating, which a general date parser cannot. Any number of fractional
 * digits is read and floored to milliseconds; a leap second (only ever the last second of a UTC day) counts as the first
 * second of the next day, as POSIX time has it.
 */
final class Rfc3339 {

    /** Not a date-time. */
    static final long UNREADABLE = Long.MIN_VALUE;

    /** 0000-01-01T00:00:00Z, the earliest year the format can write. */
    static final long EARLIEST_MILLIS = -62_167_219_200_000L;

    /** 9999-12-31T23:59:59.999Z, the last. */
    static final long LATEST_MILLIS = 253_402_300_799_999L;

    private static final int FRACTION_AT = 19;
    private static final int SECONDS_PER_DAY = 86_400;

    private Rfc3339() {}

    /** Milliseconds since the epoch, or {@link #UNREADABLE}. */
    static long millis(String text) {
        return millis(text.toCharArray(), 0, text.length());
    }

    /** The same for some characters. */
    static long millis(char[] text, int from, int length) {
        if (length < FRACTION_AT + 1 || !punctuated(text, from)) {
            return UNREADABLE;
        }
        int year = digits(text, from, 4);
        int month = digits(text, from + 5, 2);
        int day = digits(text, from + 8, 2);
        int hour = digits(text, from + 11, 2);
        int minute = digits(text, from + 14, 2);
        int second = digits(text, from + 17, 2);
        if (year < 0 || month < 1 || month > 12 || day < 1 || day > daysIn(year, month)) {
            return UNREADABLE;
        }
        if (hour < 0 || hour > 23 || minute < 0 || minute > 59 || second < 0 || second > 60) {
            return UNREADABLE;
        }
        int end = from + length;
        int zoneAt = zoneAt(text, from + FRACTION_AT, end);
        int offset = zoneAt < 0 ? Integer.MIN_VALUE : offsetSeconds(text, zoneAt, end);
        if (offset == Integer.MIN_VALUE) {
            return UNREADABLE;
        }
        long seconds = epochDay(year, month, day) * SECONDS_PER_DAY + hour * 3600 + minute * 60 + second - offset;
        if (second == 60 && Math.floorMod(seconds, SECONDS_PER_DAY) != 0) {
            return UNREADABLE;
        }
        return seconds * 1000 + fractionMillis(text, from + FRACTION_AT, zoneAt);
    }

    private static boolean punctuated(char[] text, int from) {
        char separator = text[from + 10];
        return text[from + 4] == '-'
                && text[from + 7] == '-'
                && (separator == 'T' || separator == 't')
                && text[from + 13] == ':'
                && text[from + 16] == ':';
    }

    private static int zoneAt(char[] text, int fractionAt, int end) {
        if (text[fractionAt] != '.') {
            return fractionAt;
        }
        int at = fractionAt + 1;
        while (at < end && isDigit(text[at])) {
            at++;
        }
        return at == fractionAt + 1 || at == end ? -1 : at;
    }

    private static int fractionMillis(char[] text, int fractionAt, int zoneAt) {
        int millis = 0;
        int unit = 100;
        for (int i = fractionAt + 1; i < zoneAt && unit > 0; i++, unit /= 10) {
            millis += (text[i] - '0') * unit;
        }
        return millis;
    }

    private static int offsetSeconds(char[] text, int zoneAt, int end) {
        char sign = text[zoneAt];
        if (sign == 'Z' || sign == 'z') {
            return end == zoneAt + 1 ? 0 : Integer.MIN_VALUE;
        }
        if ((sign != '+' && sign != '-') || end != zoneAt + 6 || text[zoneAt + 3] != ':') {
            return Integer.MIN_VALUE;
        }
        int hours = digits(text, zoneAt + 1, 2);
        int minutes = digits(text, zoneAt + 4, 2);
        if (hours < 0 || hours > 23 || minutes < 0 || minutes > 59) {
            return Integer.MIN_VALUE;
        }
        int seconds = hours * 3600 + minutes * 60;
        return sign == '-' ? -seconds : seconds;
    }

    private static int digits(char[] text, int from, int count) {
        int value = 0;
        for (int i = from; i < from + count; i++) {
            char c = text[i];
            if (!isDigit(c)) {
                return -1;
            }
            value = value * 10 + (c - '0');
        }
        return value;
    }

    private static boolean isDigit(char c) {
        return c >= '0' && c <= '9';
    }

    private static int daysIn(int year, int month) {
        return switch (month) {
            case 2 -> year % 4 == 0 && (year % 100 != 0 || year % 400 == 0) ? 29 : 28;
            case 4, 6, 9, 11 -> 30;
            default -> 31;
        };
    }

    /** Days since 1970-01-01 in the proleptic Gregorian calendar, counting years from March so that leap days come last. */
    private static long epochDay(int year, int month, int day) {
        long y = month > 2 ? year : year - 1L;
        long dayOfYear = (153L * (month > 2 ? month - 3 : month + 9) + 2) / 5 + day - 1;
        return y * 365 + Math.floorDiv(y, 4L) - Math.floorDiv(y, 100L) + Math.floorDiv(y, 400L) + dayOfYear - 719_468;
    }
}
