package io.tallyward.connector.kafka;

import java.util.List;

/**
 * How far a worker is with bringing its shards back.
 *
 * @param waiting the partition numbers that have no shard yet, ascending
 * @param partition the one that is being read, or was last; -1 before the first
 * @param records state records read of it
 * @param bytes bytes of keys and values read of it
 * @param remaining offsets still to be read, of all those whose reading has begun; an upper bound of the records
 * @param total offsets to be read in all, of the same
 */
public record RestoreProgress(
        List<Integer> waiting, int partition, long records, long bytes, long remaining, long total) {

    /** Nothing is being restored. */
    public static final RestoreProgress NONE = new RestoreProgress(List.of(), -1, 0, 0, 0, 0);

    public RestoreProgress {
        waiting = List.copyOf(waiting);
    }

    /** The share of offsets read, 0 to 1; 0 where nothing is known yet. */
    public double fraction() {
        return total == 0 ? 0 : (double) (total - remaining) / total;
    }
}
