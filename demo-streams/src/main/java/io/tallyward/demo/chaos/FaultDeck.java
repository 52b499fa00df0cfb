package io.tallyward.demo.chaos;

import java.util.ArrayList;
import java.util.List;
import java.util.SplittableRandom;

/**
 * Deals faults in a random order, each kind as often as its weight says, and draws what else is left to chance. The same
 * seed deals the same. Not thread-safe.
 */
final class FaultDeck {

    static final int LEAST_INSTANCES = 1;
    static final int MOST_INSTANCES = 4;

    /** One fault in so many comes while the one before is still being recovered from. */
    private static final double TOO_SOON = 0.3;

    private static final int LONGEST_CALM_MILLIS = 2_500;
    private static final int LONGEST_ABSENCE_MILLIS = 3_000;

    private final boolean brokerSpared;
    private final SplittableRandom random;
    private final List<Fault> cards = new ArrayList<>();

    FaultDeck(long seed, boolean brokerSpared) {
        this.brokerSpared = brokerSpared;
        random = new SplittableRandom(seed);
    }

    /** The next fault for so many instances: none is added to the most or taken from the least. */
    Fault next(int instances) {
        if (cards.isEmpty()) {
            shuffle();
        }
        Fault dealt = cards.remove(cards.size() - 1);
        if (dealt == Fault.ADD && instances >= MOST_INSTANCES) {
            return Fault.REMOVE;
        }
        return dealt == Fault.REMOVE && instances <= LEAST_INSTANCES ? Fault.ADD : dealt;
    }

    private void shuffle() {
        for (Fault fault : Fault.values()) {
            int copies = brokerSpared && fault.concernsBroker() ? 0 : fault.weight();
            for (int i = 0; i < copies; i++) {
                cards.add(random.nextInt(cards.size() + 1), fault);
            }
        }
    }

    /** Which of so many. */
    int choose(int count) {
        return random.nextInt(count);
    }

    /** Whether the next fault does not wait for the recovery from this one. */
    boolean comesTooSoon() {
        return random.nextDouble() < TOO_SOON;
    }

    /** How long nothing is done. */
    int calmMillis() {
        return random.nextInt(LONGEST_CALM_MILLIS);
    }

    /** How long somebody stays away. */
    int absenceMillis() {
        return random.nextInt(LONGEST_ABSENCE_MILLIS);
    }
}
