package io.tallyward.service.explain;

import java.time.Instant;
import java.time.ZoneOffset;
import java.time.format.DateTimeFormatter;
import java.util.Locale;

/** Numbers as they are read aloud. */
final class Numbers {

    private static final DateTimeFormatter MINUTE =
            DateTimeFormatter.ofPattern("yyyy-MM-dd HH:mm 'UTC'", Locale.ROOT).withZone(ZoneOffset.UTC);

    private Numbers() {}

    static String count(long value) {
        return String.format(Locale.ROOT, "%,d", value);
    }

    static String percent(double proportion) {
        return String.format(Locale.ROOT, "%.2f %%", 100 * proportion);
    }

    /** Without decimals that say nothing, as in {@code 5 %} and {@code 2.5 %}. */
    static String shortPercent(double proportion) {
        String text = String.format(Locale.ROOT, "%.2f", 100 * proportion);
        return text.replaceFirst("\\.?0+$", "") + " %";
    }

    /** A chance in whole per cent; what is neither impossible nor certain is not called so. */
    static String chance(double probability) {
        if (probability < 0.01) {
            return "less than 1 %";
        }
        return probability > 0.99 ? "more than 99 %" : String.format(Locale.ROOT, "%.0f %%", 100 * probability);
    }

    /** A difference of rates in percentage points, with its sign. */
    static String points(double difference) {
        return signed(String.format(Locale.ROOT, "%+.2f", 100 * difference));
    }

    static String z(double value) {
        return signed(String.format(Locale.ROOT, "%.2f", value));
    }

    private static String signed(String text) {
        return text.matches("[+-]0\\.?0*") ? text.substring(1) : text;
    }

    /** A p-value in words that need no statistics. */
    static String oneIn(double p) {
        if (p >= 0.1) {
            return "in " + chance(p) + " of such experiments";
        }
        if (p < 1e-6) {
            return "in fewer than one of a million such experiments";
        }
        double rounded = Math.pow(10, Math.floor(Math.log10(1 / p)) - 1);
        return "in about one of " + count(Math.round(1 / p / rounded) * Math.round(rounded)) + " such experiments";
    }

    static String minute(Instant time) {
        return MINUTE.format(time);
    }
}
