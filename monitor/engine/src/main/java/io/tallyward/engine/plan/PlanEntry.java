package io.tallyward.engine.plan;

import java.time.Instant;
import java.util.Objects;

/** An entry in the {@linkplain PlanBook book of plans}. */
public sealed interface PlanEntry {

    /** Name of the experiment it is about. */
    String experiment();

    /**
     * A plan is proposed.
     *
     * @param plan the plan, with all amendments
     * @param notBefore event time before which nothing may be amended: later than any event that can have been admitted when
     *     the proposal is made
     * @param by who proposes it, for messages
     */
    record Proposal(Plan plan, Instant notBefore, String by) implements PlanEntry {
        public Proposal {
            Objects.requireNonNull(plan, "plan");
            Objects.requireNonNull(notBefore, "notBefore");
            Objects.requireNonNull(by, "by");
        }

        @Override
        public String experiment() {
            return plan.experiment();
        }
    }

    /**
     * The plan that stands for an experiment is frozen: an event is about to be counted under it, or a window without any to be
     * sealed.
     *
     * @param experiment name of the experiment
     */
    record Freeze(String experiment) implements PlanEntry {
        public Freeze {
            Objects.requireNonNull(experiment, "experiment");
        }
    }
}
