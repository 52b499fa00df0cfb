package io.tallyward.connector.webhook;

import static org.junit.jupiter.api.Assertions.assertEquals;

import java.time.Duration;
import java.time.Instant;
import java.util.Optional;
import org.junit.jupiter.params.ParameterizedTest;
import org.junit.jupiter.params.provider.ValueSource;

class RetryAfterTest {

    private static final Instant NOW = Instant.parse("1994-11-06T08:49:07Z");

    /** The forms of a date in RFC 9110, section 5.6.7, half a minute ahead, and the seconds of its section 10.2.3. */
    @ParameterizedTest
    @ValueSource(
            strings = {
                "Sun, 06 Nov 1994 08:49:37 GMT",
                "Sunday, 06-Nov-94 08:49:37 GMT",
                "Sun Nov  6 08:49:37 1994",
                "30",
                " 030 "
            })
    void readsSecondsAndAllFormsOfADate(String value) {
        assertEquals(Optional.of(Duration.ofSeconds(30)), RetryAfter.parse(value, NOW));
    }

    @ParameterizedTest
    @ValueSource(strings = {"86401", "99999999999999999999999999", "Fri, 31 Dec 1999 23:59:59 GMT"})
    void waitsNoLongerThanADay(String value) {
        assertEquals(Optional.of(Duration.ofHours(24)), RetryAfter.parse(value, NOW));
    }

    @ParameterizedTest
    @ValueSource(strings = {"0", "Sun, 06 Nov 1994 08:49:06 GMT"})
    void waitsNotAtAllForThePast(String value) {
        assertEquals(Optional.of(Duration.ZERO), RetryAfter.parse(value, NOW));
    }

    @ParameterizedTest
    @ValueSource(
            strings = {"", " ", "-1", "+1", "1.5", "soon", "\u0663", "Sun, 06 Nov 1994", "Mon, 06 Nov 1994 08:49:37 GMT"
            })
    void ignoresEverythingElse(String value) {
        assertEquals(Optional.empty(), RetryAfter.parse(value, NOW));
    }
}
