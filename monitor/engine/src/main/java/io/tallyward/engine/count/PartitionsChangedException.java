package io.tallyward.engine.count;

import io.tallyward.engine.shard.RefusedStateException;

/**
 * The input topics have another number of partitions than when counting began. Units have moved between partitions then,
 * and what was counted of them stays behind, so that counts can no longer be exact.
 */
public final class PartitionsChangedException extends RefusedStateException {

    private static final long serialVersionUID = 1L;

    public PartitionsChangedException(int before, int now) {
        super("input topics: " + now + " partitions (expected: " + before
                + ", as when counting began); units have moved between partitions, so their counts can no longer be told"
                + " apart; run the experiments anew under another name in the configuration");
    }
}
