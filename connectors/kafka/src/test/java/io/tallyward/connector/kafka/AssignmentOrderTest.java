package io.tallyward.connector.kafka;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertFalse;
import static org.junit.jupiter.api.Assertions.assertThrows;
import static org.junit.jupiter.api.Assertions.assertTrue;

import ch.qos.logback.classic.Logger;
import ch.qos.logback.classic.spi.ILoggingEvent;
import ch.qos.logback.core.read.ListAppender;
import java.time.Duration;
import java.time.Instant;
import java.util.List;
import java.util.Map;
import java.util.Set;
import org.apache.kafka.clients.admin.TransactionState;
import org.apache.kafka.clients.consumer.OffsetAndMetadata;
import org.apache.kafka.clients.consumer.OffsetOutOfRangeException;
import org.apache.kafka.common.KafkaException;
import org.apache.kafka.common.TopicPartition;
import org.apache.kafka.common.errors.TimeoutException;
import org.apache.kafka.common.errors.WakeupException;
import org.junit.jupiter.api.Test;
import org.slf4j.LoggerFactory;

/** Everything that the group, the topics and the operator can do to a worker, in every order that changes what is right. */
class AssignmentOrderTest {

    private static final TopicPartition VIEWS_0 = new TopicPartition("crossings", 0);
    private static final TopicPartition VIEWS_1 = new TopicPartition("crossings", 1);
    private static final TopicPartition CLICKS_0 = new TopicPartition("enquiries", 0);

    private ScriptedSession scripted = new ScriptedSession(2, List.of("crossings"), builder -> builder);
    private ScriptedClients clients = scripted.clients;

    @Test
    void throwsAwayWhatItWasRestoringWhenThatIsTakenAway() {
        clients.stateEnds.put(0, 10L);
        clients.state("states", 0, 3, "quay-banner", "3");
        scripted.assign(VIEWS_0);
        scripted.session.step();
        assertTrue(scripted.session.restoring());
        scripted.journal.clear();
        clients.input.rebalance(List.of());
        assertTrue(scripted.journal.contains("released"), scripted.journal.toString());
        assertFalse(scripted.journal.contains("commit transaction"));
        assertFalse(scripted.session.restoring());
    }

    @Test
    void startsOverWhenWhatItWasRestoringComesBack() {
        clients.stateEnds.put(0, 10L);
        clients.state("states", 0, 3, "quay-banner", "3");
        scripted.assign(VIEWS_0);
        scripted.session.step();
        clients.input.rebalance(List.of());
        clients.stateEnds.clear();
        scripted.durable(VIEWS_0, 9, "quay-banner", "9");
        scripted.journal.clear();
        scripted.assign(VIEWS_0);
        scripted.session.step();
        assertEquals(9, scripted.count(0));
        assertTrue(scripted.journal.contains("read committed offsets"), "offsets of before are not believed");
        assertTrue(scripted.journal.contains("seek crossings-0 to 9"));
    }

    @Test
    void restoresAPartitionThatComesBack() {
        scripted.assign(VIEWS_0);
        scripted.session.step();
        clients.input("crossings", 0, 0, "quay-banner", "view");
        scripted.session.step();
        clients.input.rebalance(List.of());
        scripted.durable(VIEWS_0, 1, "quay-banner", "1");
        scripted.assign(VIEWS_0);
        assertEquals(List.of(), List.copyOf(scripted.reading()));
        scripted.session.step();
        clients.input("crossings", 0, 1, "quay-banner", "view");
        scripted.session.step();
        assertEquals(2, scripted.count(0));
    }

    @Test
    void letsOthersGoFirstWhileOneCannotBeRestored() {
        clients.stateEnds.put(0, 10L);
        clients.stateEnds.put(1, 0L);
        scripted.assign(VIEWS_0, VIEWS_1);
        scripted.session.step();
        scripted.session.step();
        assertEquals(List.of(), scripted.board.published().partitions(), "a moment is granted");
        scripted.stepAfter(ShardRestorer.READING_PATIENCE);
        scripted.session.step();
        assertEquals(
                Set.of(1),
                scripted.board.published().partitions().stream().collect(java.util.stream.Collectors.toSet()));
        clients.input("crossings", 1, 0, "quay-banner", "view");
        scripted.stepAfterInterval();
        assertEquals(1, scripted.count(1), "the others count on");
        assertEquals(1, clients.producer().commitCount());
        assertEquals(WorkerState.RESTORING, scripted.session.state());
        assertTrue(scripted.session.trouble().isEmpty());
        scripted.stepAfter(ShardRestorer.TOO_LONG);
        String trouble = scripted.session.trouble().orElseThrow().getMessage();
        assertTrue(trouble.startsWith("restoring from states-0 stands still at offset 0, 10 before the end"), trouble);
        clients.stateEnds.clear();
        clients.stateEnds.put(0, 0L);
        scripted.session.forget();
        scripted.session.step();
        scripted.session.step();
        assertFalse(scripted.session.restoring());
    }

    @Test
    void goesOnWhereItStoodWhenTheObstacleIsGone() {
        clients.committed.put(VIEWS_0, new OffsetAndMetadata(0));
        clients.state("states", 0, 3, "quay-banner", "3");
        clients.stateEnds.put(0, 10L);
        scripted.assign(VIEWS_0);
        scripted.session.step();
        clients.state("states", 0, 9, "quay-banner", "8");
        scripted.session.forget();
        scripted.stepAfter(ShardRestorer.STANDS_BACK);
        assertFalse(scripted.session.restoring());
        assertEquals(8, scripted.count(0));
    }

    @Test
    void hasNoShardUntilAllInputsOfAPartitionAreHere() {
        twoTopics();
        scripted.assign(VIEWS_0);
        scripted.session.step();
        assertEquals(List.of(), List.copyOf(scripted.board.published().partitions()));
        assertEquals(List.of(), List.copyOf(scripted.reading()));
        assertEquals(WorkerState.RUNNING, scripted.session.state());
        scripted.assign(VIEWS_0, CLICKS_0);
        scripted.session.step();
        assertEquals(List.of(0), scripted.board.published().partitions());
        assertEquals(2, scripted.reading().size());
    }

    @Test
    void hasNoShardFromWhenTheFirstInputOfAPartitionGoes() {
        twoTopics();
        scripted.assign(VIEWS_0, CLICKS_0);
        scripted.session.step();
        clients.input("crossings", 0, 0, "quay-banner", "view");
        scripted.session.step();
        scripted.journal.clear();
        clients.input.rebalance(List.of(VIEWS_0));
        assertTrue(scripted.journal.contains("released"), scripted.journal.toString());
        scripted.session.step();
        assertEquals(List.of(), scripted.board.published().partitions());
        assertEquals(List.of(), List.copyOf(scripted.reading()), "nothing is read that no shard can take");
    }

    @Test
    void saysWhatIsMissingWhenInputsStayApart() {
        twoTopics();
        scripted.assign(VIEWS_0);
        scripted.stepAfterInterval();
        assertTrue(scripted.session.trouble().isEmpty());
        scripted.stepAfter(ShardSession.APART);
        String apart = scripted.session.trouble().orElseThrow().getMessage();
        assertTrue(apart.contains("partition 0 of [crossings] is here and of the other input topics is not"), apart);
    }

    @Test
    void refusesARecordWithoutAShard() {
        clients.stateEnds.put(0, 10L);
        scripted.assign(VIEWS_0);
        scripted.session.step();
        clients.input.resume(List.of(VIEWS_0));
        clients.input("crossings", 0, 0, "quay-banner", "view");
        assertThrows(IllegalStateException.class, scripted.session::step);
    }

    @Test
    void isWokenUpWhileRestoringAndCommitsNothing() {
        clients.stateEnds.put(0, 10L);
        scripted.assign(VIEWS_0);
        scripted.stopping = true;
        assertThrows(WakeupException.class, scripted.session::step);
        scripted.session.finish();
        assertTrue(clients.input.closed());
        assertEquals(0, clients.producer().commitCount());
        assertTrue(clients.producer().closed());
    }

    @Test
    void commitsWhatItHasReadWhenItIsWokenUpWhilePolling() {
        scripted.assign(VIEWS_0);
        scripted.session.step();
        clients.input("crossings", 0, 0, "quay-banner", "view");
        scripted.session.step();
        scripted.session.wakeup();
        assertThrows(WakeupException.class, scripted.session::step);
        scripted.session.finish();
        assertEquals(1, clients.producer().commitCount());
        assertTrue(clients.input.closed());
    }

    @Test
    void givesTheMembershipUpWhenPollingItselfFails() {
        scripted.assign(VIEWS_0);
        scripted.session.step();
        clients.input.setPollException(new KafkaException("the group's answer made no sense"));
        assertThrows(KafkaException.class, scripted.session::step);
        assertTrue(scripted.session.mustBeAbandoned());
        scripted.session.abandon();
        assertEquals(0, clients.producer().commitCount());
        assertTrue(clients.input.closed());
        assertTrue(scripted.journal.contains("released"));
        assertTrue(scripted.journal.contains("close cluster"));
    }

    @Test
    void startsWhereItIsToldOnlyWhereNothingIsCommitted() {
        assertEquals("seek crossings-0 to 7", soughtFrom(StartPosition.latest(), 7L));
        assertEquals("seek crossings-0 to 90", soughtFrom(StartPosition.latest(), null));
        assertEquals("seek crossings-0 to 7", soughtFrom(StartPosition.earliest(), 7L));
        assertEquals("seek crossings-0 to 5", soughtFrom(StartPosition.earliest(), null));
        assertEquals("seek crossings-0 to 7", soughtFrom(StartPosition.at(Instant.EPOCH), 7L));
        assertEquals("seek crossings-0 to 50", soughtFrom(StartPosition.at(Instant.EPOCH), null));
    }

    private String soughtFrom(StartPosition start, Long committed) {
        scripted = new ScriptedSession(2, List.of("crossings"), builder -> builder.start(start));
        clients = scripted.clients;
        if (committed != null) {
            clients.committed.put(VIEWS_0, new OffsetAndMetadata(committed));
        }
        clients.timedOffset = 50L;
        clients.input.updateBeginningOffsets(Map.of(VIEWS_0, 5L));
        clients.input.updateEndOffsets(Map.of(VIEWS_0, 90L));
        clients.input.rebalance(List.of(VIEWS_0));
        scripted.session.step();
        return scripted.journal.stream()
                .filter(line -> line.startsWith("seek"))
                .reduce((first, second) -> second)
                .orElseThrow();
    }

    @Test
    void refusesStateWithoutOffsets() {
        clients.state("states", 0, 0, "quay-banner", "40");
        scripted.assign(VIEWS_0);
        LostOffsetsException lost = assertThrows(LostOffsetsException.class, scripted.session::step);
        assertTrue(lost.getMessage().contains("no committed offsets for [" + VIEWS_0 + "]"), lost.getMessage());
        assertTrue(lost.getMessage().contains("kafka-consumer-groups.sh --reset-offsets"), lost.getMessage());
    }

    @Test
    void endsWhatItsPredecessorLeftOpenBeforeAnythingIsRead() {
        clients.coordinated.put(1L, new CoordinatedTransaction("counters-earlier-0-1", TransactionState.ONGOING, 1, 4));
        clients.coordinated.put(2L, new CoordinatedTransaction("counters-other-0-1", TransactionState.ONGOING, 2, 4));
        scripted.assign(VIEWS_0);
        scripted.session.step();
        assertEquals(
                List.of("take over counters-earlier-0-1", "init transactions", "read committed offsets"),
                scripted.journal.stream()
                        .filter(line -> line.startsWith("take over")
                                || line.equals("init transactions")
                                || line.equals("read committed offsets"))
                        .toList());
    }

    @Test
    void goesOnWhereItCannotFindOutWhatItsPredecessorLeftOpen() {
        clients.ongoingFailure = new org.apache.kafka.common.errors.TimeoutException("nobody answers");
        scripted.assign(VIEWS_0);
        scripted.session.step();
        assertFalse(scripted.session.restoring());
    }

    @Test
    void beginsToReadATopicThatTheStateDoesNotKnow() {
        scripted = new ScriptedSession(2, List.of("crossings", "enquiries"), builder -> builder);
        scripted.unread = Set.of("enquiries");
        scripted.durable(VIEWS_0, 9, "quay-banner", "9");
        scripted.assign(VIEWS_0, CLICKS_0);
        scripted.session.step();
        assertTrue(scripted.journal.contains("seek " + VIEWS_0 + " to 9"), scripted.journal.toString());
        assertEquals("seek " + CLICKS_0 + " to 0", lastSeekOf(CLICKS_0));
        assertEquals(Set.of(VIEWS_0, CLICKS_0), Set.copyOf(scripted.reading()));
    }

    @Test
    void refusesWhenOffsetsOfAKnownTopicAreGoneBesideANewOne() {
        scripted = new ScriptedSession(2, List.of("crossings", "enquiries"), builder -> builder);
        scripted.unread = Set.of("enquiries");
        scripted.clients.state("states", 0, 0, "quay-banner", "40");
        scripted.assign(VIEWS_0, CLICKS_0);
        LostOffsetsException lost = assertThrows(LostOffsetsException.class, scripted.session::step);
        assertTrue(lost.getMessage().contains("no committed offsets for [" + VIEWS_0 + "]"), lost.getMessage());
    }

    private String lastSeekOf(TopicPartition partition) {
        return scripted.journal.stream()
                .filter(line -> line.startsWith("seek " + partition))
                .reduce((first, second) -> second)
                .orElseThrow();
    }

    @Test
    void showsAShardHowItsStateEndsBeforeItIsRestored() {
        scripted.foresight = 2;
        clients.committed.put(VIEWS_0, new OffsetAndMetadata(9));
        for (int offset = 0; offset < 4; offset++) {
            clients.state("states", 0, offset, "quay-banner", Integer.toString(offset));
        }
        scripted.assign(VIEWS_0);
        scripted.session.step();
        assertEquals(
                List.of(
                        "foresee quay-banner=2",
                        "foresee quay-banner=3",
                        "restore quay-banner=0",
                        "restore quay-banner=1",
                        "restore quay-banner=2",
                        "restore quay-banner=3"),
                scripted.journal.stream()
                        .filter(line -> line.startsWith("foresee") || line.startsWith("restore"))
                        .toList());
    }

    @Test
    void doesNotForeseeWhatLiesBehindTheEnd() {
        scripted.foresight = 2;
        clients.stateEnds.put(0, 2L);
        clients.committed.put(VIEWS_0, new OffsetAndMetadata(9));
        for (int offset = 0; offset < 4; offset++) {
            clients.state("states", 0, offset, "quay-banner", Integer.toString(offset));
        }
        scripted.assign(VIEWS_0);
        scripted.session.step();
        assertEquals(
                List.of("foresee quay-banner=0", "foresee quay-banner=1"),
                scripted.journal.stream()
                        .filter(line -> line.startsWith("foresee"))
                        .toList());
    }

    @Test
    void warnsOfStateWithoutOffsetsWhereRereadingDoesNoHarm() {
        ListAppender<ILoggingEvent> heard = listen(ShardRestorer.class);
        scripted = new ScriptedSession(2, List.of("crossings"), ShardGroup.Builder::rereads);
        scripted.clients.state("states", 0, 0, "quay-banner", "40");
        scripted.assign(VIEWS_0);
        scripted.session.step();
        assertEquals(1, heard.list.size());
        assertTrue(heard.list.get(0).getFormattedMessage().contains("has state but no committed offsets"));
    }

    @Test
    void noticesThatATopicHasGrownEvenIfItIsGivenNothingOfIt() {
        scripted.assign(VIEWS_0);
        scripted.session.step();
        clients.topics.put("crossings", 3);
        BrokerException grown = changed();
        assertTrue(grown.getMessage().contains("has 3 partitions"), grown.getMessage());
        scripted.session.abandon();
        BrokerException refused = assertThrows(BrokerException.class, scripted::open);
        assertEquals(
                "state topic states has 2 partitions on 127.0.0.1:9092 (expected: 3, as [crossings]): go back to the"
                        + " earlier partition count of the input, or start under a new name",
                refused.getMessage());
    }

    @Test
    void noticesThatATopicIsGone() {
        scripted.assign(VIEWS_0);
        scripted.session.step();
        clients.topics.remove("crossings");
        assertEquals(
                "input topic crossings does not exist any more on 127.0.0.1:9092: create it or correct input.topics",
                changed().getMessage());
    }

    @Test
    void doesNotTakeARecreatedTopicForItsPredecessor() {
        scripted.assign(VIEWS_0);
        scripted.session.step();
        clients.ids.put("crossings", "second");
        assertTrue(changed().getMessage().contains("was created anew"));
    }

    @Test
    void doesNotTakeARecreatedTopicsOffsetsForDeletedRecords() {
        scripted.assign(VIEWS_0);
        scripted.session.step();
        clients.ids.put("crossings", "second");
        clients.input.setPollException(new OffsetOutOfRangeException(Map.of(VIEWS_0, 12L)));
        assertThrows(BrokerException.class, scripted.session::step);
        assertTrue(scripted.session.mustBeAbandoned());
    }

    @Test
    void refusesOffsetsOfATopicThatIsGone() {
        clients.committed.put(VIEWS_0, new OffsetAndMetadata(7, "topic zeroth"));
        scripted.assign(VIEWS_0);
        BrokerException refused = assertThrows(BrokerException.class, scripted.session::step);
        assertTrue(refused.getMessage().contains("was deleted and created anew since counters last read it"));
        assertTrue(refused.getMessage().contains("--reset-offsets --to-earliest"));
        clients.committed.put(VIEWS_0, new OffsetAndMetadata(0, ""));
        scripted.session.forget();
        scripted.session.step();
        assertFalse(scripted.session.restoring(), "offsets that an operator has set are taken");
    }

    @Test
    void keepsTheMembershipWhenTheBrokerOnlyIsSilent() {
        clients.committedFailure = new TimeoutException("undecided");
        clients.pingFailure = new TimeoutException("nobody there");
        scripted.assign(VIEWS_0);
        assertThrows(TimeoutException.class, scripted.session::step);
        assertFalse(scripted.session.mustBeAbandoned());
    }

    @Test
    void writesEarlyWhenMuchHasGathered() {
        scripted.assign(VIEWS_0);
        scripted.session.step();
        scripted.shards.get(0).pending = ShardSession.MOST_PENDING_BYTES - 1;
        clients.input("crossings", 0, 0, "quay-banner", "view");
        scripted.session.step();
        assertEquals(0, clients.producer().commitCount());
        scripted.shards.get(0).pending = ShardSession.MOST_PENDING_BYTES;
        scripted.session.step();
        assertEquals(1, clients.producer().commitCount());
        assertEquals(0, scripted.shards.get(0).pendingBytes());
    }

    @Test
    void showsHowRestoringGoes() {
        ListAppender<ILoggingEvent> heard = listen(RestoreLog.class);
        clients.state("states", 0, 0, "quay-banner", "1");
        clients.state("states", 0, 3, "quay-banner", "3");
        clients.stateEnds.put(0, 10L);
        scripted.assign(VIEWS_0, VIEWS_1);
        clients.stateEnds.put(1, 0L);
        scripted.session.step();
        RestoreProgress progress = scripted.board.published().restoring();
        assertEquals(List.of(0, 1), progress.waiting());
        assertEquals(2, progress.records());
        assertEquals(10, progress.total());
        assertEquals(6, progress.remaining());
        assertEquals(0.4, progress.fraction());
        scripted.stepAfter(RestoreLog.EVERY);
        scripted.stepAfter(RestoreLog.EVERY);
        scripted.stepAfter(Duration.ofSeconds(1));
        assertEquals(
                List.of(
                        "counters: restoring shard 0 from states-0, 10 offsets to read",
                        "counters: restoring shard 0: 4 of 10 offsets read, 2 records, 0.0 MB",
                        "counters: restoring shard 0: 4 of 10 offsets read, 2 records, 0.0 MB"),
                heard.list.stream().map(ILoggingEvent::getFormattedMessage).toList());
        clients.stateRecords.clear();
        clients.state("states", 0, 9, "quay-banner", "8");
        clients.committed.put(VIEWS_0, new OffsetAndMetadata(0));
        scripted.session.forget();
        scripted.session.step();
        scripted.session.step();
        assertEquals(List.of(), scripted.board.published().restoring().waiting());
        String last = heard.list.get(heard.list.size() - 1).getFormattedMessage();
        assertTrue(last.startsWith("counters: restored shard 0: 1 records, 0.0 MB in "), last);
    }

    private BrokerException changed() {
        scripted.clock.advance(Upkeep.EVERY);
        BrokerException changed = assertThrows(BrokerException.class, scripted.session::step);
        assertTrue(scripted.session.mustBeAbandoned());
        return changed;
    }

    private void twoTopics() {
        scripted = new ScriptedSession(2, List.of("crossings", "enquiries"), builder -> builder);
        clients = scripted.clients;
    }

    private static ListAppender<ILoggingEvent> listen(Class<?> speaker) {
        Logger logger = (Logger) LoggerFactory.getLogger(speaker);
        logger.setLevel(ch.qos.logback.classic.Level.INFO);
        ListAppender<ILoggingEvent> heard = new ListAppender<>();
        heard.start();
        logger.addAppender(heard);
        return heard;
    }
}
