package io.tallyward.engine.event;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertThrows;

import java.util.ArrayList;
import java.util.LinkedHashSet;
import java.util.List;
import java.util.Random;
import java.util.Set;
import org.junit.jupiter.api.Test;

class NameTableTest {

    @Test
    void findsWhatAListFinds() {
        Random random = new Random(20260504);
        for (int size : new int[] {0, 1, 2, 3, 7, 100, 1_000}) {
            Set<String> different = new LinkedHashSet<>();
            while (different.size() < size) {
                different.add(text(random));
            }
            List<String> names = new ArrayList<>(different);
            NameTable table = new NameTable(names);
            names.forEach(name -> assertEquals(names.indexOf(name), table.find(name)));
            for (int i = 0; i < 2_000; i++) {
                String sought = text(random);
                assertEquals(names.indexOf(sought), table.find(("x" + sought + "y").toCharArray(), 1, sought.length()));
            }
        }
    }

    /** The two shortest texts with the same hash; known from the definition of the hash of a string. */
    @Test
    void tellsNamesOfOneHashApart() {
        NameTable table = new NameTable(List.of("Aa", "BB"));
        assertEquals(0, table.find("Aa"));
        assertEquals(1, table.find("BB"));
        assertEquals(-1, new NameTable(List.of("Aa")).find("BB"));
    }

    @Test
    void refusesANameGivenTwice() {
        assertThrows(IllegalArgumentException.class, () -> new NameTable(List.of("wide", "plain", "wide")));
    }

    private static String text(Random random) {
        StringBuilder text = new StringBuilder();
        for (int length = random.nextInt(5); length > 0; length--) {
            text.append((char) ('a' + random.nextInt(6)));
        }
        return text.toString();
    }
}
