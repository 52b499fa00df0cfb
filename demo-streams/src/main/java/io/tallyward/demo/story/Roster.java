package io.tallyward.demo.story;

import java.util.HexFormat;

/**
 * The visitors of the page. All experiments share them: the same unit takes part in several, as on a real page, and its
 * events lie in the same partition.
 */
final class Roster {

    /** Leaves the numbers of the stories' ids alone. */
    private static final int NUMBER = 255;

    private final Ids ids;

    Roster(long seed) {
        ids = new Ids(seed, NUMBER);
    }

    String unit(long index) {
        return "u-" + HexFormat.of().toHexDigits(ids.at(index));
    }
}
