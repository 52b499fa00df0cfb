package io.tallyward.service.status;

import java.util.Collections;
import java.util.HashMap;
import java.util.Map;

/**
 * Sums of per-partition totals that never fall. A partition's totals do fall when a transaction is aborted and its shard
 * goes back to the last commit, and they leave when the partition moves to another instance; a published counter must
 * show neither. Therefore only what exceeds the highest total seen of a partition is added.
 *
 * <p>Totals come as rows of a fixed length, one row for each key. Not thread-safe; grows with the number of partitions times
 * the number of keys.
 *
 * @param <K> what is counted
 */
final class MonotoneTotals<K> {

    private final int length;
    private final Map<Integer, Map<K, long[]>> marks = new HashMap<>();
    private final Map<K, long[]> totals = new HashMap<>();

    /** @param length numbers in a row */
    MonotoneTotals(int length) {
        this.length = length;
    }

    /** Takes a partition's totals as known, without adding them: another process has already published them. */
    void adopt(int partition, K key, long[] row) {
        raise(marksOf(partition, key), row);
        totals.computeIfAbsent(key, first -> new long[length]);
    }

    /** Adds what a partition's totals exceed its highest totals so far. */
    void advance(int partition, K key, long[] row) {
        long[] mark = marksOf(partition, key);
        long[] total = totals.computeIfAbsent(key, first -> new long[length]);
        for (int i = 0; i < length; i++) {
            total[i] += Math.max(0, row[i] - mark[i]);
        }
        raise(mark, row);
    }

    private static void raise(long[] mark, long[] row) {
        for (int i = 0; i < mark.length; i++) {
            mark[i] = Math.max(mark[i], row[i]);
        }
    }

    /** The sums by key, to be read at once; a key that was ever mentioned stays. */
    Map<K, long[]> totals() {
        return Collections.unmodifiableMap(totals);
    }

    private long[] marksOf(int partition, K key) {
        return marks.computeIfAbsent(partition, unused -> new HashMap<>())
                .computeIfAbsent(key, first -> new long[length]);
    }
}
