package io.tallyward.service.command;

import io.tallyward.engine.decide.FutilityRule;
import io.tallyward.engine.decide.PlanDesign;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.TestPlan.Better;
import io.tallyward.statistics.boundary.FutilitySequence;
import io.tallyward.statistics.boundary.Look;
import java.util.Arrays;
import java.util.List;

/**
 * The planned looks of one comparison as the deciding rules take them: where a path would end, at a boundary or, if the
 * plan has futility, below its bound. All z-values in here point towards the benefit.
 */
final class PlannedPath {

    private final boolean higherIsBetter;
    private final double drift;
    private final double[] information;
    private final double[] benefit;
    private final double[] harm;
    private final double[] futility;
    private final StopChances.Walk walk;

    PlannedPath(Plan plan, PlanDesign design) {
        List<Look> looks = design.looks();
        higherIsBetter = plan.test().better() == Better.HIGHER;
        drift = design.drift();
        information = looks.stream().mapToDouble(Look::information).toArray();
        benefit = looks.stream()
                .mapToDouble(look -> higherIsBetter ? look.upper() : -look.lower())
                .toArray();
        harm = looks.stream()
                .mapToDouble(look -> higherIsBetter ? look.lower() : -look.upper())
                .toArray();
        futility = new double[information.length];
        Arrays.fill(futility, Double.NEGATIVE_INFINITY);
        plan(new FutilityRule(plan, design), plan, design);
        walk = new StopChances.Walk(information, benefit, harm, futility);
    }

    /** Nothing is futile at the last look: whatever is no benefit there uses the plan up. */
    private void plan(FutilityRule rule, Plan plan, PlanDesign design) {
        FutilitySequence sequence = new FutilitySequence(drift);
        for (int k = 0; k < futility.length - 1; k++) {
            if (rule.spends()) {
                futility[k] = sequence.next(information[k], benefit[k], rule.betaSpent(Math.min(information[k], 1)));
            } else if (rule.looksAhead() && information[k] < 1) {
                futility[k] = Math.min(benefit[k], rule.ahead(information[k], design.critical(plan, k + 1)));
            }
        }
    }

    /**
     * The futility bound of a look as a z-value of variant minus control; infinite where it has none.
     *
     * @param index 0 for the first look
     */
    double futility(int index) {
        return higherIsBetter ? futility[index] : -futility[index];
    }

    /** The boundary for a benefit at a look as a z-value of variant minus control; infinite where it has none. */
    double benefit(int index) {
        return higherIsBetter ? benefit[index] : -benefit[index];
    }

    /** The boundary for harm at a look as a z-value of variant minus control; infinite where it has none. */
    double harm(int index) {
        return higherIsBetter ? harm[index] : -harm[index];
    }

    /**
     * When and why a path stops if futility is obeyed.
     *
     * @param drifts expected z at full information, towards the benefit; one answer for each
     */
    StopChances[] obeyed(double... drifts) {
        return walk.obeyed(drifts);
    }

    /** The same if futility is overruled. */
    StopChances[] overruled(double... drifts) {
        return walk.overruled(drifts);
    }
}
