package io.tallyward.engine.decide;

import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.TestPlan.InformationMeasure;
import io.tallyward.engine.plan.TestPlan.SpendingClock;
import io.tallyward.statistics.boundary.BoundarySequence;
import java.util.Optional;

/** The three clocks of a comparison: what looks are due by, what their correlation goes by, and what error is spent by. */
final class LookClocks {

    private final Plan plan;

    LookClocks(Plan plan) {
        this.plan = plan;
    }

    /** Information relative to its planned maximum. */
    double fraction(Evidence found, PlanDesign design) {
        double planned = design.maximumInformation();
        if (plan.test().measure() == InformationMeasure.OBSERVED) {
            return found.information() / planned;
        }
        double pooled = design.pooledRate();
        return found.weight() / (planned * pooled * (1 - pooled));
    }

    /**
     * What the correlation of looks goes by: information, while there is a single stratum. With planned allocation epochs, whose
     * rates may differ, it is the variance of the score on the scale of the plan; where an amendment began the epochs, from the
     * last look before on. The same at the end of a run whose information has not grown since the last look though counts came
     * in, because the rates moved: from that look on, then, by the score.
     */
    double correlation(
            Evidence found,
            PlanDesign design,
            double fraction,
            long windowEnd,
            boolean runEnds,
            Optional<TakenLook> lastLook) {
        boolean several = plan.epochAt(windowEnd - 1) > 0;
        double clock = fraction;
        if (!plan.epochs().isEmpty() || (several && lastLook.isEmpty())) {
            double pooled = design.pooledRate() * (1 - design.pooledRate());
            clock = found.scoreVariance() / (design.maximumInformation() * pooled * pooled);
        } else if (lastLook.isPresent()) {
            double last = lastLook.get().look().information();
            boolean score = several || (runEnds && Readiness.clockStands(fraction, last));
            clock = score ? last * found.scoreVariance() / lastLook.get().scoreVariance() : fraction;
        }
        return StrictMath.min(clock, BoundarySequence.MOST);
    }

    /** The moment on the spending clock, in [0, 1]. */
    double spending(double fraction, long windowEnd) {
        if (plan.test().clock() == SpendingClock.INFORMATION) {
            return StrictMath.min(fraction, 1);
        }
        long elapsed = windowEnd - plan.run().from().toEpochMilli();
        return StrictMath.min((double) elapsed / plan.run().atMost().toMillis(), 1);
    }
}
