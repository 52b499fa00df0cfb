package io.tallyward.service.status;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertSame;
import static org.junit.jupiter.api.Assertions.assertThrows;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.engine.count.Outcome;
import io.tallyward.engine.count.OutcomeCounts;
import io.tallyward.engine.decide.ExperimentView;
import io.tallyward.engine.event.RejectReason;
import io.tallyward.engine.record.Trust;
import io.tallyward.engine.record.Verdict;
import io.tallyward.service.status.CountReport.ExperimentCount;
import io.tallyward.service.status.StatusBoard.EventKey;
import java.util.List;
import java.util.Map;
import java.util.OptionalLong;
import org.junit.jupiter.api.Test;

class StatusBoardTest {

    private static final EventKey TRIALS = new EventKey("quay-banner", Outcome.TRIAL);

    private final StatusBoard board = new StatusBoard();
    private final ExperimentView quay = Northwater.quayBanner();
    private final ExperimentView deck = Northwater.deckMap();

    @Test
    void mergesPartitionsByName() {
        board.publishExperiments(1, Map.of("quay-banner", quay));
        board.publishExperiments(0, Map.of("deck-map", deck));
        assertEquals(
                List.of("deck-map", "quay-banner"),
                List.copyOf(board.experiments().keySet()));
        assertSame(deck, board.experiment("deck-map").orElseThrow());
    }

    @Test
    void replacesEverythingAPartitionSaidBefore() {
        board.publishExperiments(0, Map.of("quay-banner", quay, "deck-map", deck));
        board.publishExperiments(0, Map.of("deck-map", deck));
        assertTrue(board.experiment("quay-banner").isEmpty());
    }

    @Test
    void keepsNoTwinOfAnExperimentThatMoved() {
        ExperimentView later = Northwater.with(quay, Verdict.EXHAUSTED, Trust.SOUND);
        board.publishExperiments(0, Map.of("quay-banner", quay));
        board.publishExperiments(1, Map.of("quay-banner", later));
        assertSame(later, board.experiment("quay-banner").orElseThrow());
        board.withdrawDecide(1);
        board.withdrawDecide(0);
        assertTrue(board.experiments().isEmpty());
    }

    @Test
    void believesTheLastToPublish() {
        ExperimentView later = Northwater.with(quay, Verdict.EXHAUSTED, Trust.SOUND);
        board.publishExperiments(1, Map.of("quay-banner", quay));
        board.publishExperiments(0, Map.of("quay-banner", later));
        assertSame(later, board.experiment("quay-banner").orElseThrow());
        board.publishExperiments(1, Map.of("quay-banner", quay));
        assertSame(quay, board.experiment("quay-banner").orElseThrow());
    }

    @Test
    void countsAReportOnce() {
        board.publishCounts(0, report(10, 1));
        board.publishCounts(0, report(10, 1));
        board.publishCounts(1, report(5, 0));
        board.publishCounts(0, report(12, 2));
        assertEquals(17, board.counts().events().get(TRIALS));
        assertEquals(2, board.counts().rejected().get(RejectReason.OVERSIZED));
    }

    @Test
    void neverCountsDown() {
        board.publishCounts(0, report(10, 1));
        board.withdrawCount(0);
        assertTrue(board.counts().reports().isEmpty());
        assertEquals(10, board.counts().events().get(TRIALS));
        board.adoptCounts(0, report(7, 0));
        board.publishCounts(0, report(9, 1));
        assertEquals(10, board.counts().events().get(TRIALS), "what an abort took back is counted once");
        board.publishCounts(0, report(11, 1));
        assertEquals(11, board.counts().events().get(TRIALS));
    }

    @Test
    void doesNotCountWhatAnotherInstanceCounted() {
        board.adoptCounts(0, report(1_000, 3));
        assertEquals(0, board.counts().events().get(TRIALS));
        board.publishCounts(0, report(1_004, 3));
        assertEquals(4, board.counts().events().get(TRIALS));
    }

    @Test
    void readersCannotChangeIt() {
        board.publishCounts(0, report(1, 0));
        assertThrows(
                UnsupportedOperationException.class,
                () -> board.counts().reports().remove(0));
        assertThrows(
                UnsupportedOperationException.class, () -> board.experiments().clear());
    }

    private static CountReport report(long trials, long oversized) {
        return new CountReport(
                Map.of("quay-banner", new ExperimentCount(OutcomeCounts.of(trials, 0, 0, 0, 0, 0, 0, 0, 0), 2)),
                OptionalLong.empty(),
                Map.of(RejectReason.OVERSIZED, oversized),
                trials,
                false);
    }
}
