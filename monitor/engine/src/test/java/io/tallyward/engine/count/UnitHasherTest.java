package io.tallyward.engine.count;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertNotEquals;
import static org.junit.jupiter.api.Assertions.assertThrows;

import java.util.Random;
import org.bouncycastle.crypto.macs.SipHash128;
import org.bouncycastle.crypto.params.KeyParameter;
import org.junit.jupiter.api.Test;

class UnitHasherTest {

    private static final long SEED = 128;

    /** Bouncy Castle's SipHash-128, a general-purpose library's own implementation. */
    @Test
    void agreesWithAnotherImplementation() {
        Random random = new Random(SEED);
        for (int i = 0; i < 2_000; i++) {
            byte[] key = new byte[16];
            random.nextBytes(key);
            byte[] text = new byte[random.nextInt(70)];
            random.nextBytes(text);
            SipHash128 other = new SipHash128();
            other.init(new KeyParameter(key));
            other.update(text, 0, text.length);
            byte[] expected = new byte[16];
            other.doFinal(expected, 0);
            UnitHasher hasher = UnitHasher.ofKey(key);
            hasher.hash(text, 0, text.length);
            assertEquals(
                    hex(expected),
                    String.format("%016x%016x", hasher.high(), hasher.low()),
                    "seed " + SEED + ", text " + i);
        }
    }

    /** The first vector of the authors' reference code: key 00 to 0f, no text; from memory. */
    @Test
    void reproducesThePublishedVector() {
        byte[] key = new byte[16];
        for (int i = 0; i < key.length; i++) {
            key[i] = (byte) i;
        }
        UnitHasher hasher = UnitHasher.ofKey(key);
        hasher.hash(new byte[0], 0, 0);
        assertEquals("a3817f04ba25a8e66df67214c7550293", String.format("%016x%016x", hasher.high(), hasher.low()));
    }

    private static String hex(byte[] bytes) {
        StringBuilder text = new StringBuilder();
        for (byte each : bytes) {
            text.append(String.format("%02x", each));
        }
        return text.toString();
    }

    @Test
    void dependsOnTheWholeKeyOfAnyLength() {
        long once = new UnitHasher(new byte[40]).keyFingerprint();
        byte[] other = new byte[40];
        other[39] = 1;
        assertNotEquals(once, new UnitHasher(other).keyFingerprint());
        assertEquals(once, new UnitHasher(new byte[40]).keyFingerprint());
        assertThrows(IllegalArgumentException.class, () -> UnitHasher.ofKey(new byte[15]));
    }
}
