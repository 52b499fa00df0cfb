package io.tallyward.demo;

import static org.junit.jupiter.api.Assertions.assertEquals;

import java.util.ArrayList;
import java.util.List;
import org.junit.jupiter.api.Test;

class KillScheduleTest {

    @Test
    void killsAfterEqualParts() {
        assertEquals(List.of(25L, 50L, 75L), kills(3));
        assertEquals(List.of(50L), kills(1));
        assertEquals(List.of(), kills(0));
    }

    private static List<Long> kills(int wanted) {
        KillSchedule schedule = new KillSchedule(100, wanted);
        List<Long> kills = new ArrayList<>();
        for (long count = 1; count <= 100; count++) {
            if (schedule.due(count)) {
                kills.add(count);
            }
        }
        return kills;
    }
}
