package io.tallyward.engine.decide;

import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.TestPlan.Better;
import io.tallyward.engine.plan.TestPlan.Sides;

/**
 * Cumulative error spent in the upper and in the lower tail of z.
 *
 * @param upper spent in the upper tail, in [0, 0.5)
 * @param lower spent in the lower tail, in [0, 0.5)
 */
record TailSpending(double upper, double lower) {

    /**
     * Distributes the spending of one tail over both: a one-sided test spends in the direction of benefit only, and the
     * benefit tail spends nothing while the minimum run lasts.
     *
     * @param spent what a tail has spent by now
     * @param benefitOpen whether the minimum run is over
     */
    static TailSpending at(Plan plan, double spent, boolean benefitOpen) {
        double benefit = benefitOpen ? spent : 0;
        double harm = plan.test().sides() == Sides.TWO ? spent : 0;
        return plan.test().better() == Better.HIGHER
                ? new TailSpending(benefit, harm)
                : new TailSpending(harm, benefit);
    }
}
