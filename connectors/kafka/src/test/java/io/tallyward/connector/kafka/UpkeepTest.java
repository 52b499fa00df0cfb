package io.tallyward.connector.kafka;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertThrows;
import static org.junit.jupiter.api.Assertions.assertTrue;

import java.util.List;
import org.apache.kafka.common.TopicPartition;
import org.apache.kafka.common.errors.TimeoutException;
import org.junit.jupiter.api.BeforeEach;
import org.junit.jupiter.api.Test;

class UpkeepTest {

    private static final TopicPartition VIEWS_0 = new TopicPartition("crossings", 0);

    private final ScriptedSession scripted = new ScriptedSession(2, List.of("crossings"), builder -> builder);
    private final ScriptedClients clients = scripted.clients;

    @BeforeEach
    void startCounting() {
        clients.brokersHesitate = true;
        scripted.assign(VIEWS_0);
        scripted.session.step();
        scripted.stepAfter(Upkeep.EVERY);
    }

    @Test
    void commitsWhileTheBrokersHesitate() {
        assertEquals(1, clients.aside.size());
        for (int record = 0; record < 3; record++) {
            clients.input("crossings", 0, record, "quay-banner", "v");
            scripted.journal.clear();
            scripted.stepAfterInterval();
            assertTrue(scripted.journal.contains("commit transaction"), scripted.journal.toString());
        }
        assertEquals(3, scripted.count(0));
    }

    @Test
    void asksOneThingAtATime() {
        scripted.stepAfter(Upkeep.EVERY);
        scripted.stepAfter(Upkeep.EVERY);
        assertEquals(1, clients.aside.size());
        clients.aside.get(0).run();
        scripted.stepAfterInterval();
        assertEquals(1, clients.aside.size(), "the next question waits its time");
        scripted.stepAfter(Upkeep.EVERY);
        assertEquals(2, clients.aside.size());
    }

    @Test
    void heedsAnAnswerThatComesLate() {
        clients.ids.put("crossings", "second");
        clients.aside.get(0).run();
        scripted.clock.advance(Upkeep.EVERY);
        BrokerException changed = assertThrows(BrokerException.class, scripted.session::step);
        assertTrue(changed.getMessage().contains("created anew"), changed.getMessage());
        assertTrue(scripted.session.mustBeAbandoned());
    }

    @Test
    void keepsItsShardsAndAsksAgainWhenThereIsNoAnswer() {
        clients.idsFailure = new TimeoutException("nobody answers");
        clients.aside.get(0).run();
        scripted.stepAfterInterval();
        assertEquals(List.of(VIEWS_0), List.copyOf(scripted.reading()));
        scripted.stepAfter(Upkeep.EVERY);
        assertEquals(2, clients.aside.size());
    }
}
