package io.tallyward.demo.chaos;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertNotEquals;
import static org.junit.jupiter.api.Assertions.assertTrue;

import java.util.ArrayList;
import java.util.Arrays;
import java.util.List;
import org.junit.jupiter.api.Test;

class FaultDeckTest {

    private static final int DECK =
            Arrays.stream(Fault.values()).mapToInt(Fault::weight).sum();

    private static List<Fault> deal(long seed, int count, int instances) {
        FaultDeck deck = new FaultDeck(seed, false);
        List<Fault> faults = new ArrayList<>();
        for (int i = 0; i < count; i++) {
            faults.add(deck.next(instances));
        }
        return faults;
    }

    @Test
    void dealsEveryKindAsOftenAsItWeighs() {
        for (long seed = 0; seed < 50; seed++) {
            List<Fault> faults = deal(seed, 3 * DECK, 2);
            for (Fault fault : Fault.values()) {
                long count = faults.stream().filter(fault::equals).count();
                assertEquals(3L * fault.weight(), count, fault + ", seed " + seed);
            }
        }
    }

    @Test
    void dealsTheSameForTheSameSeedOnly() {
        assertEquals(deal(1, 5 * DECK, 2), deal(1, 5 * DECK, 2));
        assertNotEquals(deal(1, 5 * DECK, 2), deal(2, 5 * DECK, 2));
    }

    @Test
    void sparesTheBrokerWhenTold() {
        FaultDeck deck = new FaultDeck(1, true);
        for (int i = 0; i < 5 * DECK; i++) {
            Fault fault = deck.next(2);
            assertTrue(!fault.concernsBroker(), fault.code());
        }
    }

    @Test
    void addsNoneToTheMostAndTakesNoneFromTheLeast() {
        for (long seed = 0; seed < 50; seed++) {
            assertTrue(!deal(seed, DECK, FaultDeck.MOST_INSTANCES).contains(Fault.ADD), "seed " + seed);
            assertTrue(!deal(seed, DECK, FaultDeck.LEAST_INSTANCES).contains(Fault.REMOVE), "seed " + seed);
        }
    }

    @Test
    void firstFaultIsOfAnyKindOverTheSeeds() {
        for (Fault fault : Fault.values()) {
            boolean seen = false;
            for (long seed = 0; seed < 500 && !seen; seed++) {
                seen = deal(seed, 1, 2).get(0) == fault;
            }
            assertTrue(seen, fault.code());
        }
    }
}
