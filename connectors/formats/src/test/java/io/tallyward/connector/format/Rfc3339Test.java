package io.tallyward.connector.format;

import static org.junit.jupiter.api.Assertions.assertEquals;

import java.time.DateTimeException;
import java.time.Instant;
import java.time.LocalDate;
import java.time.OffsetDateTime;
import java.time.ZoneOffset;
import java.time.format.DateTimeFormatter;
import java.util.Random;
import org.junit.jupiter.api.Test;
import org.junit.jupiter.params.ParameterizedTest;
import org.junit.jupiter.params.provider.CsvSource;
import org.junit.jupiter.params.provider.ValueSource;

class Rfc3339Test {

    /** The examples of RFC 3339, section 5.8, with the equivalents in UTC that it states. */
    @ParameterizedTest
    @CsvSource({
        "1985-04-12T23:20:50.52Z,      1985-04-12T23:20:50.520Z",
        "1996-12-19T16:39:57-08:00,    1996-12-20T00:39:57Z",
        "1990-12-31T23:59:60Z,         1991-01-01T00:00:00Z",
        "1990-12-31T15:59:60-08:00,    1991-01-01T00:00:00Z",
        "1937-01-01T12:00:27.87+00:20, 1937-01-01T11:40:27.870Z"
    })
    void readsTheExamplesOfTheStandard(String text, Instant expected) {
        assertEquals(expected.toEpochMilli(), Rfc3339.millis(text));
    }

    /** {@code java.time} as the independent reader. */
    @Test
    void agreesWithTheDateLibraryOnEveryDayOfEightCenturies() {
        for (LocalDate day = LocalDate.of(1600, 1, 1); day.getYear() < 2400; day = day.plusDays(1)) {
            assertEquals(
                    day.atStartOfDay(ZoneOffset.UTC).toInstant().toEpochMilli(),
                    Rfc3339.millis(day + "T00:00:00Z"),
                    day::toString);
        }
    }

    @Test
    void agreesWithTheDateLibraryOnRandomTimesAndFloorsThem() {
        Random random = new Random(20260504);
        for (int i = 0; i < 20_000; i++) {
            Instant instant = Instant.ofEpochSecond(
                    random.nextLong(-62_167_132_800L, 253_402_214_400L), random.nextInt(1_000_000_000));
            ZoneOffset offset = ZoneOffset.ofTotalSeconds(60 * (random.nextInt(2 * 18 * 60 + 1) - 18 * 60));
            String text = instant.atOffset(offset).format(DateTimeFormatter.ISO_OFFSET_DATE_TIME);
            assertEquals(instant.toEpochMilli(), Rfc3339.millis(text), text);
        }
    }

    /**
     * What the date library refuses is refused; it accepts more than the standard, so not the other way round. Left out are
     * the two things it does not know: leap seconds and offsets beyond 18 hours.
     */
    @Test
    void refusesWhatTheDateLibraryRefuses() {
        Random random = new Random(20260505);
        String alphabet = "0123456789-+:.TZtz ";
        for (int i = 0; i < 50_000; i++) {
            StringBuilder text = new StringBuilder("2026-05-04T06:00:00.125+02:00");
            for (int edits = random.nextInt(3); edits >= 0; edits--) {
                text.setCharAt(random.nextInt(text.length()), alphabet.charAt(random.nextInt(alphabet.length())));
            }
            long millis = Rfc3339.millis(text.toString());
            boolean known =
                    !text.toString().contains(":60") && text.substring(24, 26).compareTo("18") < 0;
            if (millis != Rfc3339.UNREADABLE && known) {
                assertEquals(parsed(text.toString()), millis, text::toString);
            }
        }
    }

    @ParameterizedTest
    @ValueSource(
            strings = {
                "",
                "Z",
                "2026-05-04",
                "2026-05-04T06:00Z",
                "2026-05-04T06:00:00",
                "2026-05-04 06:00:00Z",
                "2026-05-04T06:00:00.Z",
                "2026-05-04T06:00:00.5",
                "2026-05-04T06:00:00,5Z",
                "2026-05-04T24:00:00Z",
                "2026-05-04T06:60:00Z",
                "2026-05-04T06:00:60Z",
                "2026-05-04T06:00:61Z",
                "2026-02-29T06:00:00Z",
                "2100-02-29T06:00:00Z",
                "2026-04-31T06:00:00Z",
                "2026-00-01T06:00:00Z",
                "2026-13-01T06:00:00Z",
                "2026-01-00T06:00:00Z",
                "+2026-05-04T06:00:00Z",
                "-026-05-04T06:00:00Z",
                "2026-05-04T06:00:00+2:00",
                "2026-05-04T06:00:00+0200",
                "2026-05-04T06:00:00+24:00",
                "2026-05-04T06:00:00+02:60",
                "2026-05-04T06:00:00ZZ",
                "2026-05-04T06:00:00Z ",
                "\u0662026-05-04T06:00:00Z"
            })
    void refusesOtherForms(String text) {
        assertEquals(Rfc3339.UNREADABLE, Rfc3339.millis(text));
    }

    @ParameterizedTest
    @ValueSource(strings = {"2024-02-29t06:00:00z", "2024-02-29T06:00:00-00:00", "2024-02-29T06:00:00.000999999999Z"})
    void readsTheFormsTheStandardLeavesOpen(String text) {
        assertEquals(Instant.parse("2024-02-29T06:00:00Z").toEpochMilli(), Rfc3339.millis(text));
    }

    @Test
    void floorsTimesBeforeTheEpoch() {
        assertEquals(-1, Rfc3339.millis("1969-12-31T23:59:59.9999Z"));
        assertEquals(Rfc3339.EARLIEST_MILLIS, Rfc3339.millis("0000-01-01T00:00:00Z"));
        assertEquals(Rfc3339.LATEST_MILLIS, Rfc3339.millis("9999-12-31T23:59:59.9999Z"));
    }

    private static long parsed(String text) {
        try {
            return OffsetDateTime.parse(text).toInstant().toEpochMilli();
        } catch (DateTimeException e) {
            return Rfc3339.UNREADABLE;
        }
    }
}
