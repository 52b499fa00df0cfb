package io.tallyward.engine.plan;

import java.time.Duration;
import java.util.List;

/** When a look is due. */
public sealed interface LookSchedule {

    /**
     * A look at regular intervals of event time from the start of the run.
     *
     * @param interval a positive multiple of the window
     */
    record Every(Duration interval) implements LookSchedule {}

    /**
     * A look as soon as the information reaches each fraction of its planned maximum.
     *
     * @param fractions ascending, in (0, 1], the last one 1
     */
    record AtFractions(List<Double> fractions) implements LookSchedule {
        public AtFractions {
            fractions = List.copyOf(fractions);
        }
    }
}
