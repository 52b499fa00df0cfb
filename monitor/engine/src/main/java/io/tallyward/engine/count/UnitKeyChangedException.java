package io.tallyward.engine.count;

import io.tallyward.engine.shard.RefusedStateException;

/**
 * The key of the unit hash is not the one under which counting began. Every unit would look new and be counted once more.
 */
public final class UnitKeyChangedException extends RefusedStateException {

    private static final long serialVersionUID = 1L;

    public UnitKeyChangedException() {
        super(
                "unit key: it is not the one under which counting began (expected: the same key on every instance and across"
                        + " restarts), so that every unit would be counted once more; put the earlier key back, or run the"
                        + " experiments anew under another name in the configuration");
    }
}
