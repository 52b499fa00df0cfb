package io.tallyward.demo.check;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertFalse;
import static org.junit.jupiter.api.Assertions.assertTrue;

import java.util.List;
import java.util.Set;
import org.junit.jupiter.api.Test;

class RecordLogTest {

    private static final String FIRST = "{\"sequence\":1,\"previous\":\"\",\"hash\":\"a\"}";
    private static final String SECOND = "{\"sequence\":2,\"previous\":\"a\",\"hash\":\"b\"}";
    private static final String THIRD = "{\"sequence\":3,\"previous\":\"b\",\"hash\":\"c\"}";

    private static RecordLog log(String... records) {
        RecordLog log = new RecordLog("decisions");
        for (String record : records) {
            log.add("quay-banner", record);
        }
        return log;
    }

    @Test
    void holdsForAnUnbrokenChain() {
        assertTrue(log(FIRST, SECOND, THIRD).chained().holds());
        assertTrue(log().chained().holds());
    }

    @Test
    void findsARecordWrittenTwice() {
        assertEquals(
                List.of("quay-banner: record 3 has sequence 2 (expected: 3)"),
                log(FIRST, SECOND, SECOND, THIRD).chained().differences());
    }

    @Test
    void findsAMissingRecord() {
        assertFalse(log(FIRST, THIRD).chained().holds());
        assertFalse(log(SECOND, THIRD).chained().holds());
    }

    @Test
    void findsARecordOfAnotherChain() {
        assertEquals(
                List.of("quay-banner: record 3 does not name the one before it"),
                log(FIRST, SECOND, THIRD.replace("\"b\"", "\"x\"")).chained().differences());
    }

    @Test
    void comparesByteForByte() {
        assertTrue(log(FIRST, SECOND).sameAs(log(FIRST, SECOND)).holds());
        assertFalse(log(FIRST, SECOND).sameAs(log(FIRST)).holds());
        assertFalse(log(FIRST).sameAs(log(FIRST, SECOND)).holds());
        assertFalse(log(FIRST).sameAs(log(FIRST.replace(":1", ":1.0"))).holds());
        assertFalse(log().sameAs(log(FIRST)).holds());
    }

    @Test
    void findsAValueThatComesTwice() {
        assertTrue(log(FIRST, SECOND).once("hash").holds());
        assertEquals(
                List.of("a: 2 times"), log(FIRST, SECOND, FIRST).once("hash").differences());
    }

    @Test
    void collectsValues() {
        assertEquals(Set.of("a", "b"), log(FIRST, SECOND).texts("hash"));
        assertEquals(2, log(FIRST, SECOND).size());
    }
}
