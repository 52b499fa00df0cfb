package io.tallyward.service.status;

import java.util.HashMap;
import java.util.Map;

/**
 * Sums of per-partition totals that never fall. A partition's totals do fall when a transaction is aborted and its shard
 * goes back to the last commit, and they leave when the partition moves to another instance; a published counter must
 * show neither. Therefore only what exceeds the highest total seen of a partition is added.
 *
 * <p>Not thread-safe; grows with the number of partitions times the number of keys.
 *
 * @param <K> what is counted
 */
final class MonotoneTotals<K> {

    private final Map<Integer, Map<K, Long>> marks = new HashMap<>();
    private final Map<K, Long> totals = new HashMap<>();

    /** Takes a partition's total as known, without adding it: another process has already published it. */
    void adopt(int partition, K key, long total) {
        marksOf(partition).merge(key, total, Math::max);
        totals.putIfAbsent(key, 0L);
    }

    /** Adds what a partition's total exceeds its highest total so far. */
    void advance(int partition, K key, long total) {
        Map<K, Long> marksOfPartition = marksOf(partition);
        long mark = marksOfPartition.getOrDefault(key, 0L);
        if (total > mark) {
            marksOfPartition.put(key, total);
        }
        totals.merge(key, Math.max(0, total - mark), Long::sum);
    }

    /** The sums by key; a key that was ever mentioned stays. */
    Map<K, Long> totals() {
        return Map.copyOf(totals);
    }

    private Map<K, Long> marksOf(int partition) {
        return marks.computeIfAbsent(partition, unused -> new HashMap<>());
    }
}
