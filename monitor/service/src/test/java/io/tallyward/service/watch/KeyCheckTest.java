package io.tallyward.service.watch;

import static org.junit.jupiter.api.Assertions.assertFalse;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.connector.kafka.KeyPartitions;
import java.nio.charset.StandardCharsets;
import java.util.function.Function;
import org.junit.jupiter.api.Test;

class KeyCheckTest {

    private static final int PARTITIONS = 4;
    private static final int PARTITION = 2;
    private static final int MANY = 100_000;

    private final KeyCheck check = new KeyCheck(PARTITION, PARTITIONS);

    private int changes(Function<String, byte[]> keyOf) {
        int changes = 0;
        for (int unit = 0; unit < MANY; unit++) {
            String name = "visitor-" + unit;
            changes += check.observe(keyOf.apply(name), utf8(name), utf8(name).length) ? 1 : 0;
        }
        return changes;
    }

    private static byte[] utf8(String text) {
        return text.getBytes(StandardCharsets.UTF_8);
    }

    @Test
    void isContentWithTheUnitAsKeyWhateverThePartitioner() {
        changes(KeyCheckTest::utf8);
        assertFalse(check.unkeyed());
    }

    @Test
    void saysOnceThatATopicWithoutKeysIsNotKeyedByUnit() {
        int changes = changes(unit -> null);
        assertTrue(check.unkeyed());
        assertTrue(changes == 1, () -> "said " + changes + " times");
    }

    @Test
    void isContentWithAnotherFormOfTheKeyThatLiesWhereTheUnitWould() {
        for (int unit = 0; unit < MANY; unit++) {
            String name = "visitor-" + unit;
            if (KeyPartitions.partitionOf(utf8(name), PARTITIONS) == PARTITION) {
                check.observe(utf8("\"" + name + "\""), utf8(name), utf8(name).length);
            }
        }
        assertFalse(check.unkeyed());
    }

    @Test
    void noticesThatATopicHasBeenMended() {
        changes(unit -> null);
        changes(KeyCheckTest::utf8);
        assertFalse(check.unkeyed());
    }

    @Test
    void hasNothingToSayAboutASinglePartition() {
        KeyCheck single = new KeyCheck(0, 1);
        for (int unit = 0; unit < MANY; unit++) {
            single.observe(null, utf8("visitor-" + unit), utf8("visitor-" + unit).length);
        }
        assertFalse(single.unkeyed());
    }
}
