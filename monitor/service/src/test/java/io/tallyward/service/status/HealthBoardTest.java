package io.tallyward.service.status;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertFalse;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.service.status.HealthSource.Health;
import io.tallyward.service.status.HealthSource.State;
import java.util.List;
import org.junit.jupiter.api.Test;

class HealthBoardTest {

    @Test
    void isReadyOnlyWhenEveryPartWorks() {
        assertTrue(HealthBoard.ready(checks(State.OK, State.OK)));
        assertFalse(HealthBoard.ready(checks(State.OK, State.STARTING)));
        assertFalse(HealthBoard.ready(checks(State.DOWN)));
        assertFalse(HealthBoard.ready(checks(State.BROKEN)));
        assertFalse(HealthBoard.ready(List.of()), "before any part has reported");
    }

    @Test
    void isAliveUnlessAnInvariantIsBroken() {
        assertTrue(HealthBoard.alive(checks(State.OK, State.STARTING, State.DOWN)));
        assertTrue(HealthBoard.alive(List.of()));
        assertFalse(HealthBoard.alive(checks(State.OK, State.BROKEN)));
    }

    @Test
    void countsAPartThatCannotAnswerAsDown() {
        HealthBoard board = new HealthBoard();
        board.add(() -> {
            throw new IllegalStateException("closed");
        });
        assertEquals(State.DOWN, board.checks().get(0).state());
        assertTrue(board.checks().get(0).detail().contains("closed"));
    }

    @Test
    void forgetsAPartThatWasRemoved() {
        HealthBoard board = new HealthBoard();
        HealthSource source = () -> new Health("kafka", State.OK, "");
        board.add(source);
        board.remove(source);
        assertTrue(board.checks().isEmpty());
    }

    private static List<Health> checks(State... states) {
        return List.of(states).stream()
                .map(state -> new Health("part", state, "It is so."))
                .toList();
    }
}
