package io.tallyward.demo.story;

import java.util.ArrayList;
import java.util.List;

/**
 * The visitors of the page. All experiments share them: the same unit takes part in several, as on a real page, and its
 * events lie in the same partition.
 */
final class Roster {

    /** Leaves the numbers of the stories' ids alone. */
    private static final int NUMBER = 255;

    private final Ids ids;
    private final List<String> units = new ArrayList<>();

    Roster(long seed) {
        ids = new Ids(seed, NUMBER);
    }

    String unit(int index) {
        while (units.size() <= index) {
            units.add(String.format("u-%016x", ids.next()));
        }
        return units.get(index);
    }
}
