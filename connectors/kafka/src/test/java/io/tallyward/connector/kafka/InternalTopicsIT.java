package io.tallyward.connector.kafka;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertThrows;

import io.tallyward.testkit.BrokerUnderTest;
import java.time.Duration;
import java.util.List;
import java.util.Map;
import java.util.concurrent.CompletableFuture;
import java.util.stream.IntStream;
import org.junit.jupiter.api.Test;

class InternalTopicsIT {

    @Test
    void createsOnceHoweverManyAsk() {
        try (BrokerUnderTest broker = BrokerUnderTest.start()) {
            Map<String, String> client = Map.of("bootstrap.servers", broker.bootstrapServers());
            String states = broker.uniqueName("states");
            String decisions = broker.uniqueName("decisions");
            String rejects = broker.uniqueName("rejects");
            List<InternalTopic> wanted = List.of(
                    InternalTopic.compacted(states, 3),
                    InternalTopic.kept(decisions, 1),
                    InternalTopic.expiring(rejects, 2, Duration.ofDays(14)));

            CompletableFuture.allOf(IntStream.range(0, 3)
                            .mapToObj(any -> CompletableFuture.runAsync(() -> InternalTopics.ensure(client, wanted)))
                            .toArray(CompletableFuture<?>[]::new))
                    .join();
            InternalTopics.ensure(client, wanted);

            assertEquals(
                    Map.of(states, 3, decisions, 1, rejects, 2),
                    InternalTopics.partitions(client, List.of(states, decisions, rejects, "not-there")));
            BrokerException refusal = assertThrows(
                    BrokerException.class,
                    () -> InternalTopics.ensure(client, List.of(InternalTopic.compacted(states, 5))));
            assertEquals(
                    "topic " + states + " has 3 partitions on " + broker.bootstrapServers() + " (expected: 5): go back"
                            + " to the earlier partition count of the input, or start under a new name",
                    refusal.getMessage());
        }
    }
}
