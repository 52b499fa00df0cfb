package io.tallyward.connector.kafka;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertFalse;
import static org.junit.jupiter.api.Assertions.assertTrue;

import java.time.Duration;
import java.util.List;
import java.util.Map;
import java.util.Optional;
import org.junit.jupiter.api.Test;

class ClientSettingsTest {

    @Test
    void letsTheOperatorTuneButNotWeaken() {
        ShardGroup group = group(Map.of(
                "max.poll.records", "500",
                "isolation.level", "read_uncommitted",
                "enable.auto.commit", "true",
                "group.instance.id", "shared",
                "transactional.id", "shared",
                "acks", "1"));
        Map<String, Object> input = ClientSettings.input(group, 1);
        assertEquals("500", input.get("max.poll.records"));
        assertEquals("read_committed", input.get("isolation.level"));
        assertEquals("false", input.get("enable.auto.commit"));
        assertFalse(input.containsKey("group.instance.id"));
        Map<String, Object> output = ClientSettings.output(group, 1, 7);
        assertEquals("counters-blue-1-7", output.get("transactional.id"));
        assertEquals("all", output.get("acks"));
    }

    @Test
    void keepsANameForEveryWorkerOnlyIfToldTo() {
        ShardGroup named = ShardGroup.builder("counters")
                .bootstrapServers("broker:9092")
                .inputTopics(List.of("views"))
                .stateTopic("states")
                .member(Optional.of("pier"))
                .shards((partition, partitions) -> new CountingShard("states", "told", partition, line -> {}))
                .build();
        assertEquals("pier-1", ClientSettings.input(named, 1).get("group.instance.id"));
        assertFalse(ClientSettings.input(group(Map.of()), 1).containsKey("group.instance.id"));
    }

    @Test
    void knowsAPredecessorByItsKeptName() {
        String earlier = "counters-pier.1ce4bb6b-64a5-4c4f-9e6d-0123456789ab";
        ShardGroup named = named("pier", "2ce4bb6b-64a5-4c4f-9e6d-0123456789ab");
        assertTrue(ClientSettings.isPredecessor(named, 1, earlier + "-1-3"));
        assertFalse(ClientSettings.isPredecessor(named, 0, earlier + "-1-3"), "another worker's");
        assertFalse(ClientSettings.isPredecessor(
                named("pie", "2ce4bb6b-64a5-4c4f-9e6d-0123456789ab"), 1, earlier + "-1-3"));
        assertFalse(ClientSettings.isPredecessor(named, 1, "counters-pier.x.1ce4bb6b-64a5-4c4f-9e6d-0123456789ab-1-3"));
        assertFalse(ClientSettings.isPredecessor(named, 1, ClientSettings.transactionalId(named, 1, 3)), "its own");
        assertTrue(ClientSettings.isOurs(named, earlier + "-1-3"));
        assertFalse(ClientSettings.isPredecessor(group(Map.of()), 1, earlier + "-1-3"), "without a kept name");
    }

    private static ShardGroup named(String member, String instance) {
        return ShardGroup.builder("counters")
                .instance(instance)
                .bootstrapServers("broker:9092")
                .inputTopics(List.of("views"))
                .stateTopic("states")
                .member(Optional.of(member))
                .shards((partition, partitions) -> new CountingShard("states", "told", partition, line -> {}))
                .build();
    }

    @Test
    void keepsSecretsOutOfWhatItPrints() {
        assertFalse(group(Map.of("sasl.jaas.config", "hidden")).toString().contains("hidden"));
    }

    private static ShardGroup group(Map<String, String> properties) {
        return ShardGroup.builder("counters")
                .instance("blue")
                .bootstrapServers("broker:9092")
                .clientProperties(properties)
                .inputTopics(List.of("views"))
                .stateTopic("states")
                .commitInterval(Duration.ofSeconds(1))
                .shards((partition, partitions) -> new CountingShard("states", "told", partition, line -> {}))
                .build();
    }
}
