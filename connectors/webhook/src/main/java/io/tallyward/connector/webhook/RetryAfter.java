package io.tallyward.connector.webhook;

import java.time.DateTimeException;
import java.time.Duration;
import java.time.Instant;
import java.time.LocalDate;
import java.time.ZoneOffset;
import java.time.format.DateTimeFormatter;
import java.time.format.DateTimeFormatterBuilder;
import java.time.temporal.ChronoField;
import java.util.List;
import java.util.Locale;
import java.util.Optional;

/** Reads the header {@code Retry-After} (RFC 9110, section 10.2.3): whole seconds or an HTTP-date. */
final class RetryAfter {

    /** The longest wait that is honoured. */
    static final Duration CAP = Duration.ofHours(24);

    private static final int MAX_LENGTH = 64;
    private static final int DIGITS_WITHIN_CAP = 9;

    private RetryAfter() {}

    /** How long to wait from {@code now}, between zero and {@link #CAP}; empty if the value is neither form. */
    static Optional<Duration> parse(String value, Instant now) {
        String text = value.strip();
        if (text.isEmpty() || text.length() > MAX_LENGTH) {
            return Optional.empty();
        }
        if (text.chars().allMatch(c -> c >= '0' && c <= '9')) {
            return Optional.of(
                    text.length() > DIGITS_WITHIN_CAP ? CAP : bounded(Duration.ofSeconds(Long.parseLong(text))));
        }
        return date(text, now).map(date -> bounded(Duration.between(now, date)));
    }

    /** The three forms of RFC 9110, section 5.6.7, all of which a recipient must accept. */
    private static Optional<Instant> date(String text, Instant now) {
        LocalDate century = now.atOffset(ZoneOffset.UTC).toLocalDate().minusYears(50);
        List<DateTimeFormatter> forms = List.of(
                DateTimeFormatter.RFC_1123_DATE_TIME,
                new DateTimeFormatterBuilder()
                        .appendPattern("EEEE, dd-MMM-")
                        .appendValueReduced(ChronoField.YEAR, 2, 2, century)
                        .appendPattern(" HH:mm:ss 'GMT'")
                        .toFormatter(Locale.US)
                        .withZone(ZoneOffset.UTC),
                DateTimeFormatter.ofPattern("EEE MMM ppd HH:mm:ss uuuu", Locale.US)
                        .withZone(ZoneOffset.UTC));
        for (DateTimeFormatter form : forms) {
            try {
                return Optional.of(form.parse(text, Instant::from));
            } catch (DateTimeException e) {
                continue;
            }
        }
        return Optional.empty();
    }

    private static Duration bounded(Duration wait) {
        if (wait.isNegative()) {
            return Duration.ZERO;
        }
        return wait.compareTo(CAP) > 0 ? CAP : wait;
    }
}
