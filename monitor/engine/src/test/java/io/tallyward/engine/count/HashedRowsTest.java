package io.tallyward.engine.count;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertFalse;
import static org.junit.jupiter.api.Assertions.assertTrue;

import java.util.ArrayList;
import java.util.List;
import java.util.Map;
import java.util.Random;
import java.util.TreeMap;
import org.junit.jupiter.api.Test;

/** Against a sorted map. */
class HashedRowsTest {

    private static final long SEED = 1979;

    private record Hash(long high, long low) implements Comparable<Hash> {
        @Override
        public int compareTo(Hash other) {
            int byHigh = Long.compareUnsigned(high, other.high);
            return byHigh != 0 ? byHigh : Long.compareUnsigned(low, other.low);
        }
    }

    private final HashedRows rows = new HashedRows(3);
    private final Map<Hash, Byte> expected = new TreeMap<>();

    private void put(Hash hash, byte mark) {
        boolean known = rows.find(hash.high(), hash.low());
        assertEquals(expected.containsKey(hash), known, hash.toString());
        if (!known) {
            rows.insert(hash.high(), hash.low());
            assertEquals(0, rows.bytes()[rows.payload()], "a new row is all zeros");
        }
        rows.bytes()[rows.payload()] = mark;
        expected.put(hash, mark);
    }

    private void remove(Hash hash) {
        boolean known = rows.find(hash.high(), hash.low());
        assertEquals(expected.remove(hash) != null, known, hash.toString());
        if (known) {
            rows.remove();
        }
    }

    private void assertSame() {
        assertEquals(expected.size(), rows.size());
        List<Byte> marks = new ArrayList<>();
        rows.forEach((bytes, offset) -> marks.add(bytes[offset + HashedRows.HASH]));
        assertEquals(List.copyOf(expected.values()), marks, "seed " + SEED);
    }

    private static Hash anyOf(Random random, int hashes) {
        Random one = new Random(random.nextInt(hashes));
        return new Hash(one.nextLong(), one.nextLong());
    }

    @Test
    void isAMap() {
        Random random = new Random(SEED);
        for (int round = 0; round < 20; round++) {
            for (int i = 0; i < 5_000; i++) {
                if (random.nextInt(100) < (round % 2 == 0 ? 80 : 30)) {
                    put(anyOf(random, 20_000), (byte) random.nextInt());
                } else {
                    remove(anyOf(random, 20_000));
                }
            }
            assertSame();
        }
        List.copyOf(expected.keySet()).forEach(this::remove);
        assertSame();
        put(new Hash(1, 2), (byte) 3);
        assertSame();
    }

    /** No keyed hash does this; the rows must hold all the same. */
    @Test
    void holdsHashesThatCrowd() {
        for (int i = 0; i < 2_000; i++) {
            put(new Hash(0x7fff_ffff_0000_0000L, (long) i * 0x9e37_79b9_7f4a_7c15L), (byte) i);
        }
        for (long edge : new long[] {0, -1, Long.MIN_VALUE, Long.MAX_VALUE}) {
            put(new Hash(edge, edge), (byte) edge);
        }
        assertSame();
    }

    @Test
    void findsAllRowsOfAPrefix() {
        Random random = new Random(SEED);
        for (int i = 0; i < 3_000; i++) {
            put(new Hash((long) random.nextInt(50) * 0x0400_0000_0000_0000L + random.nextInt(4), i), (byte) 1);
        }
        for (int bits = 0; bits < 50; bits++) {
            int prefix = (int) ((long) bits * 0x0400_0000_0000_0000L >>> 32);
            long all = expected.keySet().stream()
                    .filter(hash -> (int) (hash.high() >>> 32) == prefix)
                    .count();
            long found = 0;
            for (boolean more = rows.findFirst(prefix); more; more = rows.next(prefix)) {
                assertEquals(prefix, (int) (rows.high() >>> 32));
                found++;
            }
            assertEquals(all, found, "prefix " + bits);
        }
        assertFalse(rows.findFirst(0x1234_5678));
    }

    @Test
    void removesWhileWalkingAPrefix() {
        for (int i = 0; i < 10; i++) {
            put(new Hash(0x0500_0000_0000_0000L, i), (byte) i);
        }
        int prefix = 0x0500_0000;
        boolean more = rows.findFirst(prefix);
        int left = 0;
        while (more) {
            if (rows.low() % 2 == 0) {
                expected.remove(new Hash(rows.high(), rows.low()));
                rows.remove();
                more = rows.holds(prefix);
            } else {
                left++;
                more = rows.next(prefix);
            }
        }
        assertEquals(5, left);
        assertSame();
        assertTrue(rows.find(0x0500_0000_0000_0000L, 9));
    }
}
