package io.tallyward.engine.decide;

import static org.junit.jupiter.api.Assertions.assertArrayEquals;
import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertTrue;

import java.io.ByteArrayInputStream;
import java.io.ByteArrayOutputStream;
import java.io.DataInputStream;
import java.io.DataOutputStream;
import java.io.IOException;
import java.util.List;
import java.util.Random;
import org.junit.jupiter.api.Test;

/** Units over time are kept in few stretches, and none is lost. */
class SplitHistoryTest {

    private static final int MOST = 32;
    private static final long START = 1_777_852_800_000L;
    private static final long WINDOW = 300_000;
    private static final int[] ALL = {0, 1, 2};

    @Test
    void isAtMostABoundHoweverLongAndAddsUp() {
        for (int seed = 0; seed < 100; seed++) {
            Random random = new Random(seed);
            SplitHistory history = new SplitHistory(START, WINDOW, 3, MOST);
            int windows = 1 + random.nextInt(2_000);
            long[][] units = new long[windows][3];
            for (int window = random.nextInt(windows); window < windows; window += 1 + random.nextInt(20)) {
                for (int variant = 0; variant < 3; variant++) {
                    units[window][variant] = random.nextInt(500);
                    history.add(START + window * WINDOW, variant, units[window][variant]);
                }
            }
            List<long[]> stretches = history.stretches(ALL);
            assertTrue(stretches.size() <= MOST, "seed " + seed + ": " + stretches.size());
            int window = 0;
            for (int stretch = 0; stretch < stretches.size(); stretch++) {
                long[] sums = new long[3];
                for (; window < windows && START + window * WINDOW < history.startOf(stretch + 1); window++) {
                    for (int variant = 0; variant < 3; variant++) {
                        sums[variant] += units[window][variant];
                    }
                }
                assertArrayEquals(sums, stretches.get(stretch), "seed " + seed + ", stretch " + stretch);
            }
        }
    }

    @Test
    void isAsFineAsTheBoundAllows() {
        SplitHistory history = new SplitHistory(START, WINDOW, 1, MOST);
        for (int window = 0; window < 8 * MOST; window++) {
            history.add(START + window * WINDOW, 0, 1);
        }
        assertEquals(MOST, history.stretches(new int[] {0}).size());
        assertEquals(START + 8 * WINDOW, history.startOf(1));
    }

    @Test
    void comesBackAsItWasWritten() throws IOException {
        SplitHistory history = new SplitHistory(START, WINDOW, 3, MOST);
        long[] counts = {0, 1, 127, 128, 16_383, 16_384, Integer.MAX_VALUE, 1L << 40, Long.MAX_VALUE};
        for (int i = 0; i < counts.length; i++) {
            history.add(START + 9 * i * WINDOW, i % 3, counts[i]);
        }
        ByteArrayOutputStream bytes = new ByteArrayOutputStream();
        history.write(new DataOutputStream(bytes));
        SplitHistory copy = new SplitHistory(START, WINDOW, 3, MOST);
        copy.read(new DataInputStream(new ByteArrayInputStream(bytes.toByteArray())));
        history.add(START + 99 * WINDOW, 1, 5);
        copy.add(START + 99 * WINDOW, 1, 5);
        List<long[]> stretches = history.stretches(ALL);
        for (int i = 0; i < stretches.size(); i++) {
            assertArrayEquals(stretches.get(i), copy.stretches(ALL).get(i), "stretch " + i);
        }
    }
}
