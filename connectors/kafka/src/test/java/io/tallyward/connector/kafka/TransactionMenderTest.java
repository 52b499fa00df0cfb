package io.tallyward.connector.kafka;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertTrue;

import ch.qos.logback.classic.Level;
import ch.qos.logback.classic.Logger;
import ch.qos.logback.classic.spi.ILoggingEvent;
import ch.qos.logback.core.read.ListAppender;
import java.util.List;
import java.util.Map;
import org.apache.kafka.clients.admin.TransactionState;
import org.apache.kafka.common.TopicPartition;
import org.junit.jupiter.api.BeforeEach;
import org.junit.jupiter.api.Test;
import org.slf4j.LoggerFactory;

class TransactionMenderTest {

    private static final TopicPartition STATES = new TopicPartition("states", 1);
    private static final TopicPartition OFFSETS =
            new TopicPartition("__consumer_offsets", Math.abs("counters".hashCode()) % 50);

    private final ScriptedClients clients = new ScriptedClients();
    private final List<String> journal = clients.journal;
    private final ShardGroup group = ShardGroup.builder("counters")
            .bootstrapServers("broker:9092")
            .inputTopics(List.of("crossings"))
            .stateTopic("states")
            .internalTopics(
                    partitions -> List.of(InternalTopic.compacted("states", partitions), InternalTopic.kept("told", 3)))
            .shards((partition, partitions) -> new CountingShard("states", "told", partition, line -> {}))
            .build();
    private final TransactionMender mender = new TransactionMender(
            group, clients, clients.cluster(), clients.input, 2, () -> journal.add("put the producer aside"));

    @BeforeEach
    void hangInTwoPartitions() {
        clients.topics.put("__consumer_offsets", 50);
        clients.input.assign(List.of(new TopicPartition("crossings", 0)));
        open(STATES);
        open(OFFSETS);
    }

    @Test
    void commitsWhatWasCommitted() {
        ended("counters-red-0-3", TransactionState.COMPLETE_COMMIT, 5);
        look(true);
        assertEquals(List.of(), journal, "what is open once may be just ending");
        look(true);
        assertEquals(
                List.of(
                        "prove membership",
                        "put the producer aside",
                        "take over counters-red-0-3",
                        "fill offsets",
                        "fill states-1",
                        "commit counters-red-0-3",
                        "forget offsets of [states-0]"),
                journal);
        assertEquals(List.of(), mender.undecided());
    }

    @Test
    void abortsWhatWasAborted() {
        ended("counters-red-0-3", TransactionState.COMPLETE_ABORT, 5);
        lookTwice(true);
        assertEquals(
                List.of("abort in " + OFFSETS, "abort in states-1"),
                journal.stream().sorted().toList());
    }

    @Test
    void touchesNothingWhereItCannotTell() {
        ended("counters-red-0-3", TransactionState.EMPTY, 6);
        lookTwice(true);
        assertEquals(List.of(), journal);
        assertEquals(2, mender.undecided().size());
        String remedy = TransactionMender.remedy(clients.open.get(0), "broker:9092");
        assertTrue(
                remedy.contains(
                        "kafka-transactions.sh --bootstrap-server broker:9092 abort --topic states --partition 1"
                                + " --start-offset 10"),
                remedy);
    }

    @Test
    void touchesNothingThatIsInHand() {
        ended("counters-red-0-3", TransactionState.ONGOING, 4);
        lookTwice(true);
        assertEquals(List.of(), journal);
        assertEquals(List.of(), mender.undecided());
    }

    @Test
    void touchesNothingOfAnotherService() {
        ended("ferries-red-0-3", TransactionState.COMPLETE_COMMIT, 5);
        lookTwice(true);
        assertEquals(List.of(), journal);
    }

    @Test
    void leavesALivingWorkersTransactionsToIt() {
        clients.members.add("counters-red-0");
        ended("counters-red-0-3", TransactionState.COMPLETE_COMMIT, 5);
        lookTwice(true);
        assertEquals(List.of(), journal);
    }

    @Test
    void leavesWhatNobodySeesToToOneWorker() {
        ended("counters-red-0-3", TransactionState.COMPLETE_COMMIT, 5);
        lookTwice(false);
        assertEquals(List.of(), journal);
    }

    @Test
    void mendsItsOwnEvenThoughItLives() {
        clients.output();
        clients.members.add("counters-blue-0");
        ended("counters-blue-0-1", TransactionState.COMPLETE_COMMIT, 5);
        lookTwice(false);
        assertTrue(journal.indexOf("put the producer aside") < journal.indexOf("take over counters-blue-0-1"));
        assertTrue(journal.contains("commit counters-blue-0-1"));
    }

    @Test
    void doesNotTouchAnIdThatMovesOn() {
        ended("counters-red-0-3", TransactionState.COMPLETE_COMMIT, 5);
        look(true);
        clients.onProof = () -> ended("counters-red-0-3", TransactionState.ONGOING, 5);
        look(true);
        assertTrue(journal.stream().noneMatch(line -> line.startsWith("take over")), journal.toString());
    }

    @Test
    void saysThatATransactionHasEndedWhenThatIsSeen() {
        ListAppender<ILoggingEvent> heard = new ListAppender<>();
        heard.start();
        Logger logger = (Logger) LoggerFactory.getLogger(TransactionMender.class);
        logger.setLevel(Level.INFO);
        logger.addAppender(heard);
        ended("counters-red-0-3", TransactionState.COMPLETE_ABORT, 5);
        lookTwice(true);
        clients.open.removeIf(transaction -> transaction.partition().equals(STATES));
        look(true);
        clients.open.clear();
        look(true);
        logger.detachAppender(heard);
        List<String> said = heard.list.stream()
                .map(ILoggingEvent::getFormattedMessage)
                .filter(line -> line.contains("no longer open"))
                .toList();
        assertEquals(
                List.of(
                        "counters: the transaction that was aborted is no longer open in [states-1]",
                        "counters: the transaction that was aborted is no longer open in [" + OFFSETS + "]"),
                said);
    }

    @Test
    void mendsNothingWithoutMembership() {
        ended("counters-red-0-3", TransactionState.COMPLETE_COMMIT, 5);
        look(true);
        clients.onProof = () -> {
            throw new org.apache.kafka.clients.consumer.CommitFailedException();
        };
        look(true);
        assertEquals(List.of("prove membership"), journal);
    }

    private void look(boolean caretaker) {
        mender.mend(mender.question().get(), caretaker);
    }

    private void lookTwice(boolean caretaker) {
        look(caretaker);
        look(caretaker);
    }

    private void open(TopicPartition partition) {
        clients.open.add(new OpenTransaction(partition, 1000, 4, 2, 10));
    }

    private void ended(String transactionalId, TransactionState state, int epoch) {
        clients.coordinated.putAll(Map.of(1000L, new CoordinatedTransaction(transactionalId, state, 1000, epoch)));
    }
}
