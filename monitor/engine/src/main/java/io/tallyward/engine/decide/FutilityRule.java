package io.tallyward.engine.decide;

import io.tallyward.engine.plan.FutilityPlan;
import io.tallyward.engine.plan.Plan;
import io.tallyward.statistics.inference.CurtailmentBound;
import io.tallyward.statistics.spending.SpendingFunction;

/**
 * When a plan gives up. Bounds are on the scale on which a benefit is positive; none holds at the last look, where whatever
 * is no benefit uses the plan up.
 */
public final class FutilityRule {

    private final FutilityPlan rule;
    private final SpendingFunction spending;
    private final double typeTwoError;
    private final double drift;

    /** The rule of a plan, which may be to never give up. */
    public FutilityRule(Plan plan, PlanDesign design) {
        rule = plan.futility().orElse(null);
        spending = rule instanceof FutilityPlan.ErrorSpending errors ? SpendingFunctions.of(errors.spending()) : null;
        typeTwoError = 1 - plan.test().power();
        drift = design.drift();
    }

    /** Whether bounds come from the type II error spent, along the whole path. */
    public boolean spends() {
        return spending != null;
    }

    /** Whether bounds come from the boundary that a last look would have. */
    public boolean looksAhead() {
        return rule != null && spending == null;
    }

    /**
     * Type II error that may be spent by a moment on the spending clock; 0 for a rule that spends none.
     *
     * @param time in [0, 1)
     */
    public double betaSpent(double time) {
        return spends() ? spending.spent(typeTwoError, time) : 0;
    }

    /**
     * The bound of a rule that looks ahead.
     *
     * @param fraction information fraction, in (0, 1)
     * @param critical boundary for a benefit at a last look with full information; finite
     */
    public double ahead(double fraction, double critical) {
        if (rule instanceof FutilityPlan.ConditionalPower conditional) {
            return switch (conditional.under()) {
                case TREND -> CurtailmentBound.underTrend(fraction, critical, conditional.below());
                case DESIGN -> CurtailmentBound.conditional(fraction, critical, drift, conditional.below());
                case NONE -> CurtailmentBound.conditional(fraction, critical, 0, conditional.below());
            };
        }
        return CurtailmentBound.predictive(fraction, critical, ((FutilityPlan.PredictivePower) rule).below());
    }
}
