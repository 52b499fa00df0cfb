package io.tallyward.service.rehearse;

import java.util.EnumMap;
import java.util.Map;

/** Counts of what is named by the constants of an enum. Not thread-safe. */
final class Counters<E extends Enum<E>> {

    private final Map<E, Long> counts;

    Counters(Class<E> type) {
        counts = new EnumMap<>(type);
    }

    /** Counts one if it happened. */
    void count(E what, boolean happened) {
        if (happened) {
            counts.merge(what, 1L, Long::sum);
        }
    }

    void add(Counters<E> later) {
        later.counts.forEach((what, count) -> counts.merge(what, count, Long::sum));
    }

    long get(E what) {
        return counts.getOrDefault(what, 0L);
    }
}
