package io.tallyward.demo.check;

import java.util.ArrayList;
import java.util.Comparator;
import java.util.List;
import java.util.Map;
import java.util.Set;
import java.util.TreeSet;

/** Compares two maps entry by entry. */
final class Differences {

    /** More than this is said in one number. */
    private static final int SHOWN = 5;

    private Differences() {}

    /**
     * One sentence per entry that differs, the first few of them and then how many more.
     *
     * @param absent what an entry counts for that one of the maps does not have
     */
    static <K, V> List<String> between(Map<K, V> truth, Map<K, V> monitor, V absent) {
        List<String> sentences = new ArrayList<>();
        Set<K> keys = new TreeSet<>(Comparator.comparing(Object::toString));
        keys.addAll(truth.keySet());
        keys.addAll(monitor.keySet());
        int differing = 0;
        for (K key : keys) {
            V right = truth.getOrDefault(key, absent);
            V counted = monitor.getOrDefault(key, absent);
            if (!right.equals(counted) && differing++ < SHOWN) {
                sentences.add(key + ": the truth is " + right + ", the monitor says " + counted);
            }
        }
        if (differing > SHOWN) {
            sentences.add("and " + (differing - SHOWN) + " more");
        }
        return sentences;
    }
}
