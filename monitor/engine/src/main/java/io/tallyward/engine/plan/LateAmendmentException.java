package io.tallyward.engine.plan;

import io.tallyward.engine.shard.RefusedStateException;
import java.time.Instant;

/** An amendment takes effect at a moment whose counts are final already. */
public final class LateAmendmentException extends RefusedStateException {

    private static final long serialVersionUID = 1L;

    /**
     * Names the experiment and both moments.
     *
     * @param at when the amendment takes effect
     * @param counted up to where counts or decisions are final without it
     */
    public LateAmendmentException(String experiment, Instant at, Instant counted) {
        super("plan of " + experiment + ": an amendment takes effect at " + at + ", but everything up to " + counted
                + " is counted without it; the clocks of the instances or of the producers are far apart: set them"
                + " right, and give the experiment a new name");
    }
}
