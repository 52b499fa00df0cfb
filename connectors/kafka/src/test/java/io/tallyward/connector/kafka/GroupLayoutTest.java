package io.tallyward.connector.kafka;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertThrows;

import java.util.List;
import org.junit.jupiter.api.Test;

class GroupLayoutTest {

    private final ScriptedClients clients = new ScriptedClients();
    private final ShardGroup group = ShardGroup.builder("counters")
            .bootstrapServers("broker:9092")
            .inputTopics(List.of("views", "clicks"))
            .stateTopic("states")
            .internalTopics(
                    partitions -> List.of(InternalTopic.compacted("states", partitions), InternalTopic.kept("told", 3)))
            .shards((partition, partitions) -> new CountingShard("states", "told", partition, line -> {}))
            .build();

    @Test
    void createsWhatIsMissing() {
        topics(4, 4);
        clients.topics.put("told", 3);
        assertEquals(4, GroupLayout.resolve(group, clients.cluster()));
        assertEquals(List.of("create states"), clients.journal);
        assertEquals(4, clients.topics.get("states"));
    }

    @Test
    void saysWhichInputIsMissing() {
        clients.topics.put("views", 4);
        refusal("input topic clicks does not exist on broker:9092: create it or correct input.topics");
    }

    @Test
    void refusesInputsOfDifferentWidth() {
        topics(4, 6);
        refusal("input topics differ in their partition counts on broker:9092: views has 4, clicks has 6: views and"
                + " clicks of one unit meet only if all input topics have the same count; recreate one of them");
    }

    @Test
    void refusesStateOfAnotherWidth() {
        topics(4, 4);
        clients.topics.put("states", 2);
        refusal("topic states has 2 partitions on broker:9092 (expected: 4): go back to the earlier partition count of"
                + " the input, or start under a new name");
    }

    private void topics(int views, int clicks) {
        clients.topics.put("views", views);
        clients.topics.put("clicks", clicks);
    }

    private void refusal(String sentence) {
        BrokerException refusal =
                assertThrows(BrokerException.class, () -> GroupLayout.resolve(group, clients.cluster()));
        assertEquals(sentence, refusal.getMessage());
    }
}
