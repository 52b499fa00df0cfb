package io.tallyward.engine.decide;

import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.Tail;
import io.tallyward.engine.plan.TestPlan.Better;

/**
 * Cumulative error spent in the upper and in the lower tail of z.
 *
 * @param upper spent in the upper tail, in [0, 0.5)
 * @param lower spent in the lower tail, in [0, 0.5)
 */
record TailSpending(double upper, double lower) {

    /**
     * What the tails of a comparison may have spent at a moment: each by its own function and level, the benefit tail
     * nothing while the minimum run lasts.
     *
     * @param time moment on the spending clock, in [0, 1]
     * @param benefitOpen whether the minimum run is over
     */
    static TailSpending at(Plan plan, TailLevels levels, double time, boolean benefitOpen) {
        double benefit = benefitOpen ? spent(plan.test().benefit(), levels.benefit(), time) : 0;
        boolean alike = benefitOpen && plan.test().symmetric() && levels.harm() == levels.benefit();
        double harm = alike
                ? benefit
                : plan.test()
                        .harm()
                        .map(tail -> spent(tail, levels.harm(), time))
                        .orElse(0.0);
        return of(plan, benefit, harm);
    }

    /** The same with everything spent. */
    static TailSpending all(Plan plan, TailLevels levels) {
        return of(plan, levels.benefit(), levels.harm());
    }

    private static TailSpending of(Plan plan, double benefit, double harm) {
        return plan.test().better() == Better.HIGHER
                ? new TailSpending(benefit, harm)
                : new TailSpending(harm, benefit);
    }

    private static double spent(Tail tail, double level, double time) {
        return SpendingFunctions.of(tail).spent(level, time);
    }
}
