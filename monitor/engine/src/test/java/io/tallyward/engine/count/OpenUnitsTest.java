package io.tallyward.engine.count;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertTrue;

import java.io.ByteArrayOutputStream;
import java.io.DataOutputStream;
import java.io.IOException;
import java.util.Arrays;
import java.util.HashMap;
import java.util.Map;
import java.util.Random;
import org.junit.jupiter.api.Test;

/** A unit comes back as it was put there, however much or little there is to it. */
class OpenUnitsTest {

    private static final long SEED = 42;
    private static final long FROM = 1_777_852_800_000L;
    private static final long ATTRIBUTION = 1_800_000;
    private static final int VARIANTS = 10;

    private static byte[] written(OpenUnit unit) throws IOException {
        ByteArrayOutputStream bytes = new ByteArrayOutputStream();
        unit.write(new DataOutputStream(bytes));
        return bytes.toByteArray();
    }

    @Test
    void keepsEveryUnitAsItWas() throws IOException {
        Random random = new Random(SEED);
        OpenUnits units = new OpenUnits(FROM, VARIANTS, true);
        Map<Long, OpenUnit> expected = new HashMap<>();
        for (int i = 0; i < 40_000; i++) {
            long key = random.nextInt(500);
            boolean known = units.find(hash(key), key);
            assertEquals(expected.containsKey(key), known);
            if (known && random.nextInt(20) == 0) {
                units.remove();
                expected.remove(key);
                continue;
            }
            OpenUnit unit = known ? units.load() : units.fresh();
            OpenUnit twin = expected.computeIfAbsent(key, any -> new OpenUnit(VARIANTS));
            long seed = random.nextLong();
            boolean busy = key < 20;
            change(unit, new Random(seed), busy);
            change(twin, new Random(seed), busy);
            units.store(hash(key), key, unit, known);
        }
        assertEquals(expected.size(), units.size());
        int large = 0;
        for (Map.Entry<Long, OpenUnit> entry : expected.entrySet()) {
            assertTrue(units.find(hash(entry.getKey()), entry.getKey()));
            byte[] bytes = written(entry.getValue());
            assertTrue(Arrays.equals(bytes, written(units.load())), "seed " + SEED + ", unit " + entry.getKey());
            large += bytes.length > 300 ? 1 : 0;
        }
        assertTrue(large > 5, "some with very much to them: " + large);
    }

    private static void change(OpenUnit unit, Random random, boolean busy) {
        for (int i = busy ? 30 : 1; i > 0; i--) {
            int variant = random.nextInt(20) == 0 ? random.nextInt(VARIANTS) : 9;
            long at = FROM + (random.nextInt(9) == 0 ? 31_535_999_999L : random.nextInt(10_000_000));
            if (random.nextBoolean()) {
                int segments = random.nextInt(1 << 12);
                if (unit.expose(variant, at, random.nextInt(), ATTRIBUTION)) {
                    unit.segments(segments);
                }
            } else {
                long arrival = random.nextBoolean() ? Long.MIN_VALUE : at + random.nextInt(1_000);
                unit.click(variant, at, arrival, ATTRIBUTION);
            }
        }
    }

    private static long hash(long key) {
        return key * 0x9e37_79b9_7f4a_7c15L;
    }

    @Test
    void surviveBeingWrittenAndRead() throws IOException {
        Random random = new Random(SEED);
        OpenUnit copy = new OpenUnit(VARIANTS);
        for (int i = 0; i < 200; i++) {
            OpenUnit unit = new OpenUnit(VARIANTS);
            change(unit, random, i % 2 == 0);
            byte[] bytes = written(unit);
            copy.read(new ChunkReader(bytes));
            assertTrue(Arrays.equals(bytes, written(copy)), "unit " + i);
            assertTrue(Arrays.equals(bytes, written(copy.copy())), "copy of unit " + i);
        }
    }

    @Test
    void tellsAChangeOnceUntilTheMarkIsTaken() {
        OpenUnits units = new OpenUnits(FROM, VARIANTS, false);
        units.find(1, 1);
        OpenUnit unit = units.fresh();
        unit.expose(0, FROM, 0, ATTRIBUTION);
        assertTrue(units.store(1, 1, unit, false));
        units.find(1, 1);
        assertEquals(false, units.store(1, 1, units.load(), true));
        units.find(1, 1);
        units.unmark();
        assertEquals(true, units.store(1, 1, units.load(), true));
    }
}
