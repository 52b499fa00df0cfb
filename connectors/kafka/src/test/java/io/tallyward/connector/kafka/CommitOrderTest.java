package io.tallyward.connector.kafka;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertFalse;
import static org.junit.jupiter.api.Assertions.assertThrows;
import static org.junit.jupiter.api.Assertions.assertTrue;

import java.time.Duration;
import java.util.List;
import java.util.stream.Stream;
import org.apache.kafka.clients.admin.TransactionState;
import org.apache.kafka.clients.consumer.CommitFailedException;
import org.apache.kafka.clients.consumer.OffsetAndMetadata;
import org.apache.kafka.common.KafkaException;
import org.apache.kafka.common.TopicPartition;
import org.apache.kafka.common.errors.DisconnectException;
import org.apache.kafka.common.errors.InvalidProducerEpochException;
import org.apache.kafka.common.errors.NotLeaderOrFollowerException;
import org.apache.kafka.common.errors.ProducerFencedException;
import org.apache.kafka.common.errors.RecordTooLargeException;
import org.apache.kafka.common.errors.TimeoutException;
import org.apache.kafka.common.errors.TopicAuthorizationException;
import org.junit.jupiter.api.BeforeEach;
import org.junit.jupiter.api.Test;
import org.junit.jupiter.params.ParameterizedTest;
import org.junit.jupiter.params.provider.EnumSource;
import org.junit.jupiter.params.provider.MethodSource;

/** Everything that can come between a shard's work and its being durable, in every order that changes what is right. */
class CommitOrderTest {

    private static final TopicPartition VIEWS = new TopicPartition("crossings", 0);

    private final ScriptedSession scripted = new ScriptedSession(1, List.of("crossings"), builder -> builder);
    private final ScriptedClients clients = scripted.clients;

    @BeforeEach
    void startAtForty() {
        scripted.durable(VIEWS, 40, "quay-banner", "40");
        scripted.assign(VIEWS);
        scripted.session.step();
        clients.input("crossings", 0, 40, "quay-banner", "view");
        scripted.session.step();
        assertEquals(41, scripted.count(0));
    }

    static Stream<RuntimeException> healing() {
        return Stream.of(
                new TimeoutException("no answer"),
                new KafkaException("wrapped", new TimeoutException("no answer")),
                new DisconnectException("gone"),
                new NotLeaderOrFollowerException("moved"),
                new CommitFailedException(),
                new ProducerFencedException("another has the id"),
                new InvalidProducerEpochException("another has the id"),
                new TopicAuthorizationException("told"));
    }

    @ParameterizedTest
    @MethodSource("healing")
    void countsOnceWhateverTheCommitEndsIn(RuntimeException failure) {
        clients.producer().commitTransactionException = failure;
        afterAFailedStep(KafkaException.class);
        scripted.session.step();
        clients.input("crossings", 0, 40, "quay-banner", "view");
        scripted.stepAfterInterval();
        assertEquals(41, scripted.count(0));
        assertEquals(1, clients.producer().commitCount());
        assertEquals(1, scripted.board.published().aborts());
    }

    @ParameterizedTest
    @MethodSource("healing")
    void countsOnceWhateverSendingTheOffsetsEndsIn(RuntimeException failure) {
        clients.producer().sendOffsetsToTransactionException = failure;
        afterAFailedStep(KafkaException.class);
        assertEquals(0, clients.producer().commitCount());
        scripted.session.step();
        clients.input("crossings", 0, 40, "quay-banner", "view");
        scripted.stepAfterInterval();
        assertEquals(41, scripted.count(0));
    }

    @Test
    void stopsForGoodAtARecordThatIsTooLarge() {
        clients.producer().sendException = new RecordTooLargeException("2 MB");
        scripted.clock.advance(Duration.ofSeconds(1));
        assertThrows(ShardFailure.class, scripted.session::step);
    }

    @Test
    void countsOnceWhenFencedBetweenBeginningAndCommitting() {
        clients.producer().beginTransactionException = new ProducerFencedException("another has the id");
        afterAFailedStep(ProducerFencedException.class);
        scripted.session.step();
        assertEquals(40, scripted.count(0));
        assertEquals(2, clients.producers.size());
    }

    @Test
    void restoresNothingUnderAProducerThatWasFencedAtItsStart() {
        clients.producer().commitTransactionException = new TimeoutException("no answer");
        afterAFailedStep(TimeoutException.class);
        clients.initFailure = new ProducerFencedException("another has the id");
        scripted.journal.clear();
        assertThrows(ProducerFencedException.class, scripted.session::step);
        assertFalse(scripted.journal.contains("read committed offsets"), scripted.journal.toString());
        scripted.session.forget();
        scripted.session.step();
        assertFalse(scripted.session.restoring());
    }

    @Test
    void believesACommitOfUnknownOutcomeThatWentThrough() {
        clients.producer().commitTransactionException = new TimeoutException("nobody heard the answer");
        afterAFailedStep(TimeoutException.class);
        clients.coordinated.put(7L, ended(TransactionState.COMPLETE_COMMIT));
        scripted.durable(VIEWS, 41, "quay-banner", "41");
        scripted.journal.clear();
        scripted.session.step();
        assertEquals(41, scripted.count(0));
        assertTrue(scripted.journal.contains("seek crossings-0 to 41"));
        assertTrue(
                scripted.journal.stream().noneMatch(line -> line.startsWith("take over")), "its end stays on record");
    }

    @Test
    void repeatsACommitOfUnknownOutcomeThatWasAborted() {
        clients.producer().commitTransactionException = new TimeoutException("not even sent");
        afterAFailedStep(TimeoutException.class);
        clients.coordinated.put(7L, ended(TransactionState.COMPLETE_ABORT));
        scripted.journal.clear();
        scripted.session.step();
        assertTrue(scripted.journal.contains("seek crossings-0 to 40"));
        assertEquals(40, scripted.count(0));
    }

    @Test
    void endsWhatItLeftOpenBeforeItReadsOffsets() {
        clients.producer().commitTransactionException = new TimeoutException("not even sent");
        afterAFailedStep(TimeoutException.class);
        clients.coordinated.put(7L, ended(TransactionState.ONGOING));
        scripted.journal.clear();
        scripted.session.step();
        assertEquals(
                List.of("take over counters-blue-0-1", "init transactions", "read committed offsets"),
                scripted.journal.subList(0, 3));
    }

    @ParameterizedTest
    @EnumSource(
            value = TransactionState.class,
            names = {"PREPARE_COMMIT", "PREPARE_ABORT", "PREPARE_EPOCH_FENCE"})
    void waitsWhileTheBrokerEndsWhatItLeftOpen(TransactionState state) {
        clients.producer().commitTransactionException = new TimeoutException("nobody heard the answer");
        afterAFailedStep(TimeoutException.class);
        clients.coordinated.put(7L, ended(state));
        scripted.journal.clear();
        BrokerException waits = assertThrows(BrokerException.class, scripted.session::step);
        assertTrue(waits.getMessage().contains("is being ended by its coordinator"), waits.getMessage());
        assertEquals(List.of(), scripted.journal);
        assertFalse(scripted.session.mustBeAbandoned());
    }

    @Test
    void readsOffsetsBeforeStateAfterAnAbortToo() {
        clients.producer().commitTransactionException = new TimeoutException("no answer");
        afterAFailedStep(TimeoutException.class);
        scripted.journal.clear();
        scripted.session.step();
        assertTrue(scripted.journal.indexOf("read committed offsets") < scripted.journal.indexOf("read state"));
        assertTrue(scripted.journal.indexOf("read committed offsets")
                < scripted.journal.indexOf("ask for the end of the state"));
    }

    @Test
    void takesUpAgainAsANewMemberWhenItWasTooSlow() {
        clients.input.losePartitions(List.of(VIEWS));
        scripted.session.step();
        assertEquals(0, clients.producer().commitCount());
        scripted.assign(VIEWS);
        scripted.session.step();
        assertEquals(40, scripted.count(0), "what was read and not committed is read again");
    }

    @Test
    void commitsTheTopicsIdentityWithEachOffset() {
        scripted.stepAfterInterval();
        OffsetAndMetadata committed = clients.producer()
                .consumerGroupOffsetsHistory()
                .get(0)
                .values()
                .iterator()
                .next()
                .get(VIEWS);
        assertEquals(new OffsetAndMetadata(41, "topic first"), committed);
    }

    private void afterAFailedStep(Class<? extends RuntimeException> failure) {
        scripted.clock.advance(Duration.ofSeconds(1));
        assertThrows(failure, scripted.session::step);
        assertFalse(scripted.session.mustBeAbandoned());
        scripted.session.forget();
        assertTrue(scripted.session.restoring());
    }

    private static CoordinatedTransaction ended(TransactionState state) {
        return new CoordinatedTransaction("counters-blue-0-1", state, 7, 3);
    }
}
