package io.tallyward.connector.kafka;

import static org.junit.jupiter.api.Assertions.assertEquals;

import io.tallyward.testkit.BrokerUnderTest;
import java.util.Map;
import java.util.Optional;
import org.awaitility.Awaitility;
import org.junit.jupiter.api.AfterAll;
import org.junit.jupiter.api.BeforeAll;
import org.junit.jupiter.api.Test;

/** Instances that keep their name: a successor need not wait for the session of its predecessor to end. */
class NamedMemberIT {

    /** Longer than anything here waits. */
    private static final String SESSION_MILLIS = "300000";

    private static BrokerUnderTest broker;

    private final CountingBench bench = new CountingBench(broker);

    @BeforeAll
    static void connect() {
        broker = BrokerUnderTest.start();
    }

    @AfterAll
    static void disconnect() {
        broker.close();
    }

    private ShardRunner named() {
        return bench.run(builder -> builder.member(Optional.of("pier"))
                .clientProperties(Map.of("session.timeout.ms", SESSION_MILLIS))
                .workers(2));
    }

    @Test
    void takesItsPartitionsFromAPredecessorThatStillRunsAndShutsItOut() {
        bench.produce(200);
        try (ShardRunner predecessor = named()) {
            bench.awaitRunning(predecessor, 4);
            bench.awaitTold(100);
            try (ShardRunner successor = named()) {
                bench.awaitRunning(successor, 4);
                bench.produce(200);
                Awaitility.await().atMost(CountingBench.PATIENCE).until(() -> bench.fatal.get() != null);
                assertEquals(
                        "another instance has started as pier in group " + bench.group
                                + ": this one stops; give every instance that runs a kafka.instance of its own",
                        bench.fatal.get().getMessage());
                bench.produce(200);
                bench.assertExact();
            }
        }
    }

    @Test
    void leavesAtOnceWhenItStopsInOrder() {
        bench.produce(200);
        ShardRunner first = named();
        bench.awaitRunning(first, 4);
        first.close();
        try (ShardRunner other = bench.run(builder ->
                builder.member(Optional.of("quay")).clientProperties(Map.of("session.timeout.ms", SESSION_MILLIS)))) {
            bench.awaitRunning(other, 4);
            bench.produce(100);
            bench.assertExact();
        }
    }
}
