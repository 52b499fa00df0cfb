package io.tallyward.connector.kafka;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertFalse;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.testkit.ManualClock;
import java.util.ArrayList;
import java.util.List;
import java.util.Map;
import org.apache.kafka.clients.consumer.OffsetAndMetadata;
import org.apache.kafka.common.KafkaException;
import org.apache.kafka.common.TopicPartition;
import org.junit.jupiter.api.BeforeEach;
import org.junit.jupiter.api.Test;

class OutboxSessionTest {

    private static final TopicPartition NOTICES = new TopicPartition("notices", 0);

    private final ScriptedClients clients = new ScriptedClients();
    private final OutboxLedger ledger = new OutboxLedger();
    private final List<OutboxRecord> handed = new ArrayList<>();
    private OutboxSession session;

    @BeforeEach
    void join() {
        clients.topics.put("notices", 1);
        OutboxSource source = new OutboxSource("tellers", "notices", 10, Map.of("bootstrap.servers", "broker:9092"));
        session = new OutboxSession(source, clients, ledger, handed::add, ManualClock.at("2026-05-04T06:00:00Z"));
        clients.input.updateBeginningOffsets(Map.of(NOTICES, 0L));
        clients.input.updateEndOffsets(Map.of(NOTICES, 0L));
        clients.input.setMaxPollRecords(5);
        clients.input.rebalance(List.of(NOTICES));
        clients.input.seek(NOTICES, 0);
    }

    @Test
    void commitsUpToTheLowestNoticeThatIsNotDone() {
        notices(0, 4);
        session.step();
        handed.get(1).done();
        handed.get(2).done();
        session.step();
        assertEquals(0, committed());
        handed.get(0).done();
        handed.get(0).done();
        session.step();
        assertEquals(3, committed());
        handed.get(3).done();
        session.step();
        assertEquals(4, committed());
        assertEquals(4, ledger.delivered());
        assertEquals(0, ledger.count());
    }

    @Test
    void pausesWhileTooMuchIsPending() {
        notices(0, 20);
        for (int step = 0; step < 5; step++) {
            session.step();
        }
        assertEquals(10, handed.size());
        handed.forEach(OutboxRecord::done);
        session.step();
        assertTrue(handed.size() > 10);
    }

    @Test
    void stopsWantingNoticesWhosePartitionHasMoved() {
        notices(0, 2);
        session.step();
        handed.get(0).done();
        clients.input.rebalance(List.of());
        assertEquals(1, committed());
        assertFalse(handed.get(1).wanted());
        handed.get(1).done();
        assertEquals(1, ledger.delivered());
        assertEquals(0, ledger.count());
    }

    @Test
    void keepsHandingOutWhileTheBrokerCannotBeAsked() {
        notices(0, 2);
        clients.input.setOffsetsException(new KafkaException("nobody there"));
        session.step();
        assertEquals(2, handed.size());
        assertTrue(session.trouble().isPresent());
    }

    private void notices(long from, long to) {
        for (long offset = from; offset < to; offset++) {
            clients.input("notices", 0, offset, "quay-banner", "stop");
        }
    }

    private long committed() {
        OffsetAndMetadata offset = clients.committed.get(NOTICES);
        return offset == null ? -1 : offset.offset();
    }
}
