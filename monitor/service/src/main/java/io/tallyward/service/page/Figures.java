package io.tallyward.service.page;

import java.time.Duration;
import java.time.Instant;
import java.time.ZoneOffset;
import java.time.format.DateTimeFormatter;
import java.util.Locale;
import java.util.regex.Pattern;

/** How numbers and times are written on a page: one way everywhere, independent of the machine's language. */
final class Figures {

    /** Shown where there is no value yet. */
    static final String NONE = "–";

    private static final DateTimeFormatter MINUTE =
            DateTimeFormatter.ofPattern("yyyy-MM-dd HH:mm 'UTC'", Locale.ROOT).withZone(ZoneOffset.UTC);
    private static final DateTimeFormatter SECOND = DateTimeFormatter.ofPattern(
                    "yyyy-MM-dd HH:mm:ss 'UTC'", Locale.ROOT)
            .withZone(ZoneOffset.UTC);

    private static final String LEAST = "below 1e-99";

    /** A p-value that a reason writes with three digits in its exponent, or as nothing at all. */
    private static final Pattern TINY = Pattern.compile("(?<=p-value )(?:0\\.0|\\d\\.\\de-\\d{3})(?!\\d)");

    /** The sign of a negative number that stands free. */
    private static final Pattern NEGATIVE = Pattern.compile("(?<=[ (])-(?=\\d)");

    private Figures() {}

    static String count(long value) {
        return minus(String.format(Locale.ROOT, "%,d", value));
    }

    /** A number with two decimals, as a z value; {@link #NONE} for null or what is not finite. */
    static String decimal(Double value) {
        return fixed(value, "%.2f");
    }

    /** A difference of rates in percentage points, with its sign. */
    static String points(Double difference) {
        return difference == null ? NONE : fixed(difference * 100, "%+.2f");
    }

    /** A proportion in per cent with two decimals. */
    static String percent(Double proportion) {
        return proportion == null ? NONE : fixed(proportion * 100, "%.2f %%");
    }

    /** A proportion in whole per cent; a part that is not yet the whole never shows as 100 %. */
    static String wholePercent(double proportion) {
        double percent = proportion * 100;
        if (percent > 0 && percent < 1) {
            return "< 1 %";
        }
        return fixed(percent < 100 ? Math.floor(percent) : percent, "%.0f %%");
    }

    /** A probability that is spent: two significant digits, and 0 where none is. */
    static String probability(double value) {
        return value == 0 ? "0" : pValue(value);
    }

    /**
     * A p-value with two significant digits, in the form in which the reasons of a decision have it. Below 1e-99 only
     * that is said: a double ends not far below, and 0 would claim what no data can show.
     */
    static String pValue(double value) {
        return value < 1e-99 ? LEAST : fixed(value, "%.2g");
    }

    /** A reason out of a decision record, with its numbers written as those of the page. */
    static String prose(String reason) {
        String text = TINY.matcher(reason).replaceAll(LEAST);
        return NEGATIVE.matcher(text).replaceAll("−");
    }

    static String minute(Instant time) {
        return MINUTE.format(time);
    }

    /** The same without naming the zone, where a heading does. */
    static String shortMinute(Instant time) {
        return minute(time).replace(" UTC", "");
    }

    static String second(Instant time) {
        return SECOND.format(time);
    }

    /** A stretch of time in its largest sensible unit, as in {@code 12 min}. */
    static String span(Duration span) {
        long minutes = span.toMinutes();
        if (minutes < 1) {
            return "less than a minute";
        }
        if (minutes < 120) {
            return minutes + " min";
        }
        return minutes < 48 * 60 ? span.toHours() + " h" : span.toDays() + " days";
    }

    /** A coordinate of a drawing. */
    static String coordinate(double value) {
        return String.format(Locale.ROOT, "%.1f", value);
    }

    private static String fixed(Double value, String format) {
        if (value == null || !Double.isFinite(value)) {
            return NONE;
        }
        String text = String.format(Locale.ROOT, format, value);
        return minus(text.matches("-0\\.?0*") ? text.substring(1) : text);
    }

    private static String minus(String text) {
        return text.startsWith("-") ? "−" + text.substring(1) : text;
    }
}
