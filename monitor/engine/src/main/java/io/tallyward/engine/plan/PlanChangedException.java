package io.tallyward.engine.plan;

import io.tallyward.engine.shard.RefusedStateException;

/** A plan differs from the one under which its experiment has been counted or decided so far. */
public final class PlanChangedException extends RefusedStateException {

    private static final long serialVersionUID = 1L;

    private final String experiment;

    /**
     * Names the experiment and both plans.
     *
     * @param experiment name of the experiment
     * @param frozen digest of the plan its events were counted under
     * @param found digest of the plan at hand
     */
    public PlanChangedException(String experiment, String frozen, String found) {
        super("plan of " + experiment + ": it has changed since its first event was counted (digest "
                + frozen.substring(0, 12) + " then, " + found.substring(0, 12)
                + " now); put the earlier plan file back, or give the changed plan a new experiment name");
        this.experiment = experiment;
    }

    public String experiment() {
        return experiment;
    }
}
