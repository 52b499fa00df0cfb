package io.tallyward.connector.kafka;

import static org.junit.jupiter.api.Assertions.assertEquals;

import java.util.EnumSet;
import java.util.Optional;
import java.util.Set;
import org.apache.kafka.clients.admin.TransactionState;
import org.apache.kafka.common.TopicPartition;
import org.junit.jupiter.api.Test;

class OwedMarkerTest {

    private static final OpenTransaction OPEN = new OpenTransaction(new TopicPartition("states", 0), 1000, 4, 2, 10);

    @Test
    void isTheCommitThatTheCoordinatorHasPutDown() {
        assertEquals(OwedMarker.COMMIT, owed(TransactionState.COMPLETE_COMMIT, 1000, 5));
    }

    @Test
    void isACommitAlsoWhenALaterOneWasCommittedUnderTheSameId() {
        assertEquals(OwedMarker.COMMIT, owed(TransactionState.COMPLETE_COMMIT, 1000, 7));
    }

    @Test
    void isTheAbortThatTheCoordinatorHasPutDown() {
        assertEquals(OwedMarker.ABORT, owed(TransactionState.COMPLETE_ABORT, 1000, 5));
    }

    @Test
    void isUnknownWhenALaterOneWasAborted() {
        assertEquals(OwedMarker.UNKNOWN, owed(TransactionState.COMPLETE_ABORT, 1000, 6));
    }

    @Test
    void isUnknownWhenTheOpenOneIsNewerThanWhatIsPutDown() {
        assertEquals(OwedMarker.UNKNOWN, owed(TransactionState.COMPLETE_COMMIT, 1000, 4));
        assertEquals(OwedMarker.UNKNOWN, owed(TransactionState.COMPLETE_ABORT, 1000, 4));
    }

    @Test
    void isUnknownAfterTheIdWasTakenOver() {
        assertEquals(OwedMarker.UNKNOWN, owed(TransactionState.EMPTY, 1000, 6));
    }

    @Test
    void isUnknownForAnotherProducerUnderTheSameId() {
        assertEquals(OwedMarker.UNKNOWN, owed(TransactionState.COMPLETE_COMMIT, 1001, 5));
    }

    @Test
    void isUnknownWithoutACoordinator() {
        assertEquals(OwedMarker.UNKNOWN, OwedMarker.of(OPEN, Optional.empty(), true));
    }

    @Test
    void isUnknownWhereEpochsSpanTransactions() {
        for (TransactionState state : EnumSet.of(TransactionState.COMPLETE_COMMIT, TransactionState.COMPLETE_ABORT)) {
            assertEquals(OwedMarker.UNKNOWN, OwedMarker.of(OPEN, known(state, 1000, 5), false), state.toString());
        }
        assertEquals(OwedMarker.NONE, OwedMarker.of(OPEN, known(TransactionState.ONGOING, 1000, 5), false));
    }

    @Test
    void isNoneWhileTheCoordinatorHasItInHand() {
        Set<TransactionState> inHand = EnumSet.of(
                TransactionState.ONGOING,
                TransactionState.PREPARE_COMMIT,
                TransactionState.PREPARE_ABORT,
                TransactionState.PREPARE_EPOCH_FENCE);
        for (TransactionState state : inHand) {
            assertEquals(OwedMarker.NONE, owed(state, 1000, 5), state.toString());
        }
    }

    private static OwedMarker owed(TransactionState state, long producerId, int epoch) {
        return OwedMarker.of(OPEN, known(state, producerId, epoch), true);
    }

    private static Optional<CoordinatedTransaction> known(TransactionState state, long producerId, int epoch) {
        return Optional.of(new CoordinatedTransaction("counters-blue-0-1", state, producerId, epoch));
    }
}
