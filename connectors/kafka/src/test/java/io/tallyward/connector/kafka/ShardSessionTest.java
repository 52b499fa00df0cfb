package io.tallyward.connector.kafka;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertFalse;
import static org.junit.jupiter.api.Assertions.assertThrows;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.testkit.ManualClock;
import java.time.Duration;
import java.util.List;
import java.util.Map;
import org.apache.kafka.clients.admin.TransactionState;
import org.apache.kafka.clients.consumer.OffsetAndMetadata;
import org.apache.kafka.clients.consumer.OffsetOutOfRangeException;
import org.apache.kafka.clients.producer.MockProducer;
import org.apache.kafka.common.KafkaException;
import org.apache.kafka.common.TopicPartition;
import org.apache.kafka.common.errors.ProducerFencedException;
import org.apache.kafka.common.errors.RecordTooLargeException;
import org.apache.kafka.common.errors.TimeoutException;
import org.junit.jupiter.api.Test;

class ShardSessionTest {

    private static final TopicPartition VIEWS = new TopicPartition("crossings", 0);

    private final ScriptedClients clients = new ScriptedClients();
    private final List<String> journal = clients.journal;
    private final ManualClock clock = ManualClock.at("2026-05-04T06:00:00Z");
    private final StatusBoard board = new StatusBoard(0);
    private final ShardSession session = open();

    @Test
    void readsCommittedOffsetsBeforeState() {
        clients.committed.put(VIEWS, new OffsetAndMetadata(7));
        clients.state("states", 0, 3, "quay-banner", "7");
        assign();
        journal.clear();
        session.step();
        assertEquals(
                List.of(
                        "init transactions",
                        "read committed offsets",
                        "ask for the end of the state",
                        "read state",
                        "restore quay-banner=7",
                        "committed {quay-banner=7}",
                        "seek crossings-0 to 7",
                        "resume 1"),
                journal);
    }

    @Test
    void saysThatATransactionDoesNotEndWhenOffsetsStayUndecided() {
        clients.committedFailure = new TimeoutException("the last committed offset could not be determined");
        assign();
        session.step();
        assertTrue(session.trouble().isEmpty(), "a transaction may take its time");
        clock.advance(ShardRestorer.TOO_LONG);
        session.step();
        String undecided = session.trouble().orElseThrow().getMessage();
        assertTrue(undecided.contains("a transaction does not end"), undecided);
        assertTrue(undecided.contains("crossings-0"), undecided);
        assertTrue(session.restoring());
        clients.committedFailure = null;
        clock.advance(ShardRestorer.STANDS_BACK);
        session.step();
        assertFalse(session.restoring());
        assertTrue(session.trouble().isEmpty());
    }

    @Test
    void blamesNoTransactionWhenTheBrokerDoesNotAnswerAtAll() {
        clients.committedFailure = new TimeoutException("the last committed offset could not be determined");
        clients.pingFailure = new TimeoutException("nobody there");
        assign();
        TimeoutException silent = assertThrows(TimeoutException.class, session::step);
        assertEquals("nobody there", silent.getMessage());
    }

    @Test
    void readsNothingBeforeTheShardIsRestored() {
        assign();
        assertEquals(List.of("seek crossings-0 to 0", "pause 1"), journal.subList(0, 2));
        assertTrue(clients.input.paused().contains(VIEWS));
    }

    @Test
    void makesStateOutputsAndOffsetsDurableTogether() {
        start();
        clients.input("crossings", 0, 0, "quay-banner", "view");
        clients.input("crossings", 0, 1, "quay-banner", "click");
        stepAfterInterval();
        assertEquals(1, clients.producer().commitCount());
        assertEquals(
                List.of("told", "told", "states"),
                clients.producer().history().stream()
                        .map(record -> record.topic())
                        .toList());
        assertEquals(2, committedOffset(clients.producer()));
        assertEquals("committed {quay-banner=2}", journal.get(journal.size() - 1));
        assertEquals(1, board.published().commits());
        assertEquals(2, board.published().recordsConsumed());
    }

    @Test
    void waitsForTheCommitInterval() {
        start();
        clients.input("crossings", 0, 0, "quay-banner", "view");
        clock.advance(Duration.ofMillis(999));
        session.step();
        assertEquals(0, clients.producer().commitCount());
        clock.advance(Duration.ofMillis(1));
        session.step();
        assertEquals(1, clients.producer().commitCount());
    }

    @Test
    void commitsTheStartPositionOnceAndThenNothingWhileNothingHappens() {
        start();
        stepAfterInterval();
        assertEquals(1, clients.producer().commitCount());
        stepAfterInterval();
        stepAfterInterval();
        assertEquals(1, clients.producer().commitCount());
        assertEquals(3, session.cycles());
    }

    @Test
    void restoresAfterAFailedCommitAndCarriesNothingOver() {
        start();
        clients.input("crossings", 0, 0, "quay-banner", "view");
        clients.producer().commitTransactionException = new KafkaException("the broker hung up");
        clock.advance(Duration.ofSeconds(1));
        assertThrows(KafkaException.class, session::step);
        assertTrue(clients.producer().closed());
        session.forget();
        assertTrue(session.restoring());
        assertFalse(session.mustBeAbandoned());
        assertEquals("released", journal.get(journal.size() - 1));

        clients.state("states", 0, 0, "quay-banner", "40");
        clients.committed.put(VIEWS, new OffsetAndMetadata(40));
        clients.coordinated.put(7L, new CoordinatedTransaction("counters-blue-0-1", TransactionState.ONGOING, 7, 3));
        journal.clear();
        session.step();
        assertEquals(
                List.of("take over counters-blue-0-1", "init transactions", "read committed offsets"),
                journal.subList(0, 3));
        clients.input("crossings", 0, 40, "quay-banner", "view");
        stepAfterInterval();
        assertEquals(2, clients.producers.size());
        assertEquals("committed {quay-banner=41}", journal.get(journal.size() - 1));
        assertEquals(41, committedOffset(clients.producer()));
        assertEquals(1, board.published().aborts());
    }

    @Test
    void restoresAfterBeingFenced() {
        start();
        clients.input("crossings", 0, 0, "quay-banner", "view");
        clients.producer().fenceProducer();
        clock.advance(Duration.ofSeconds(1));
        KafkaException fenced = assertThrows(KafkaException.class, session::step);
        assertTrue(BrokerSentence.takenOver(fenced));
        assertTrue(fenced instanceof ProducerFencedException);
        session.forget();
        session.step();
        assertEquals(2, clients.producers.size());
    }

    @Test
    void commitsBeforeLettingGo() {
        start();
        clients.input("crossings", 0, 0, "quay-banner", "view");
        session.step();
        journal.clear();
        clients.input.rebalance(List.of());
        assertEquals(List.of("commit transaction", "committed {quay-banner=1}", "released"), journal.subList(0, 3));
    }

    @Test
    void letsGoEvenIfTheLastCommitFails() {
        start();
        clients.input("crossings", 0, 0, "quay-banner", "view");
        session.step();
        clients.producer().sendOffsetsToTransactionException = new KafkaException("too late");
        journal.clear();
        clients.input.rebalance(List.of());
        assertFalse(journal.contains("commit transaction"));
        assertEquals(1, journal.stream().filter("released"::equals).count());
        session.step();
        assertFalse(session.restoring());
    }

    @Test
    void commitsNothingWhenThePartitionIsLost() {
        start();
        clients.input("crossings", 0, 0, "quay-banner", "view");
        session.step();
        journal.clear();
        clients.input.losePartitions(List.of(VIEWS));
        assertEquals(List.of("released"), journal);
        assertEquals(0, clients.producer().commitCount());
    }

    @Test
    void saysWhereAShardBroke() {
        start();
        clients.input("crossings", 0, 0, "quay-banner", null);
        ShardFailure failure = assertThrows(ShardFailure.class, session::step);
        assertEquals("shard 0 of group counters failed at crossings-0@0", failure.getMessage());
        assertEquals("a record without a value", failure.getCause().getMessage());
    }

    @Test
    void takesSilenceForSilenceOnlyWhileTheBrokerAnswers() {
        start();
        stepAfterInterval();
        assertTrue(journal.get(lastTime()).endsWith("caught up true"));

        clients.input.setOffsetsException(new TimeoutException("nobody there"));
        clock.advance(Contact.EVERY);
        session.step();
        assertTrue(session.trouble().isPresent());
        assertTrue(journal.get(lastTime()).endsWith("caught up false"));

        clients.input.setOffsetsException(null);
        stepAfterInterval();
        assertTrue(session.trouble().isEmpty());
        assertTrue(journal.get(lastTime()).endsWith("caught up true"));
    }

    @Test
    void readsOnWhereRecordsWereDeleted() {
        start();
        clients.input.updateBeginningOffsets(Map.of(VIEWS, 90L));
        clients.input.setPollException(new OffsetOutOfRangeException(Map.of(VIEWS, 12L)));
        session.step();
        clients.input("crossings", 0, 90, "quay-banner", "view");
        stepAfterInterval();
        assertEquals(91, committedOffset(clients.producer()));
        assertTrue(board.published().lastError().orElseThrow().contains("from offset 12 to 90 were gone"));
    }

    @Test
    void startsAgainWhenATopicHasGrown() {
        clients.input.updateBeginningOffsets(Map.of(new TopicPartition("crossings", 1), 0L));
        clients.input.rebalance(List.of(new TopicPartition("crossings", 1)));
        BrokerException grown = assertThrows(BrokerException.class, session::step);
        assertTrue(grown.getMessage().contains("has grown beyond 1 partitions"));
        assertTrue(session.mustBeAbandoned());
    }

    @Test
    void refusesARecordThatIsTooLargeAsABrokenPromise() {
        start();
        clients.input("crossings", 0, 0, "quay-banner", "view");
        clients.producer().commitTransactionException = new KafkaException(new RecordTooLargeException("2 MB"));
        clock.advance(Duration.ofSeconds(1));
        assertThrows(ShardFailure.class, session::step);
    }

    private ShardSession open() {
        clients.topics.put("crossings", 1);
        clients.topics.put("states", 1);
        ShardGroup group = ShardGroup.builder("counters")
                .bootstrapServers("127.0.0.1:9092")
                .inputTopics(List.of("crossings"))
                .stateTopic("states")
                .shards((partition, partitions) -> new CountingShard("states", "told", partition, journal::add))
                .build();
        return new ShardSession(group, clients, clock, () -> false, board);
    }

    private void assign() {
        clients.input.updateBeginningOffsets(Map.of(VIEWS, 0L));
        clients.input.updateEndOffsets(Map.of(VIEWS, 0L));
        clients.input.rebalance(List.of(VIEWS));
    }

    private void start() {
        assign();
        session.step();
        assertFalse(session.restoring());
    }

    private void stepAfterInterval() {
        clock.advance(Duration.ofSeconds(1));
        session.step();
    }

    private int lastTime() {
        for (int line = journal.size() - 1; line >= 0; line--) {
            if (journal.get(line).startsWith("time ")) {
                return line;
            }
        }
        throw new AssertionError("time never passed: " + journal);
    }

    private static long committedOffset(MockProducer<byte[], byte[]> producer) {
        List<Map<String, Map<TopicPartition, OffsetAndMetadata>>> history = producer.consumerGroupOffsetsHistory();
        return history.get(history.size() - 1)
                .values()
                .iterator()
                .next()
                .get(VIEWS)
                .offset();
    }
}
