package io.tallyward.testkit;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertFalse;

import java.nio.charset.StandardCharsets;
import java.util.List;
import org.junit.jupiter.api.Test;

class BrokerUnderTestIT {

    @Test
    void isSharedAndGivesBackWhatWasProduced() {
        try (BrokerUnderTest first = BrokerUnderTest.start();
                BrokerUnderTest second = BrokerUnderTest.start()) {
            assertEquals(first.bootstrapServers(), second.bootstrapServers());
            assertFalse(first.description().isBlank());

            String topic = first.newTopic("crossings", 2);
            first.produce(topic, 1, bytes("unit-1"), bytes("later partition"));
            first.produce(topic, 0, bytes("unit-2"), bytes("earlier partition"));

            List<String> read = second.readAll(topic).stream()
                    .map(record -> new String(record.value(), StandardCharsets.UTF_8))
                    .toList();
            assertEquals(List.of("earlier partition", "later partition"), read);
        }
    }

    private static byte[] bytes(String text) {
        return text.getBytes(StandardCharsets.UTF_8);
    }
}
