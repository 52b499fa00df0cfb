package io.tallyward.connector.kafka;

import static io.tallyward.connector.kafka.CountingShard.bytes;
import static io.tallyward.connector.kafka.CountingShard.text;
import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.testkit.BrokerUnderTest;
import java.time.Clock;
import java.time.Duration;
import java.util.List;
import java.util.Map;
import java.util.concurrent.CopyOnWriteArrayList;
import org.awaitility.Awaitility;
import org.junit.jupiter.api.Test;

class OutboxReaderIT {

    @Test
    void handsOutAgainWhatWasNotDone() {
        try (BrokerUnderTest broker = BrokerUnderTest.start()) {
            String topic = broker.newTopic("notices", 1);
            OutboxSource source = new OutboxSource(
                    broker.uniqueName("tellers"),
                    topic,
                    OutboxSource.USUAL_MOST_PENDING,
                    Map.of("bootstrap.servers", broker.bootstrapServers()));
            for (String notice : List.of("stop", "mismatch", "late")) {
                broker.produce(topic, 0, bytes("quay-banner"), bytes(notice));
            }
            List<OutboxRecord> first = new CopyOnWriteArrayList<>();
            try (OutboxReader reader = OutboxReader.start(source, Clock.systemUTC(), first::add)) {
                awaitSize(first, 3);
                assertEquals(3, reader.status().pending());
                assertTrue(reader.status().oldestPending().isPresent());
                first.get(0).done();
                first.get(2).done();
                assertEquals(1, reader.status().pending());
                assertEquals(2, reader.status().delivered());
            }
            List<OutboxRecord> second = new CopyOnWriteArrayList<>();
            try (OutboxReader reader = OutboxReader.start(source, Clock.systemUTC(), second::add)) {
                awaitSize(second, 2);
                second.forEach(OutboxRecord::done);
                assertEquals(0, reader.status().pending());
            }
            assertEquals(
                    List.of("mismatch", "late"),
                    second.stream().map(notice -> text(notice.value())).toList());
        }
    }

    private static void awaitSize(List<OutboxRecord> handed, int size) {
        Awaitility.await().atMost(Duration.ofSeconds(30)).until(() -> handed.size() >= size);
    }
}
