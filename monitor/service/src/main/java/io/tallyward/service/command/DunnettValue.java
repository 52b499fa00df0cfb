package io.tallyward.service.command;

import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.Variant;
import io.tallyward.statistics.distribution.Normal;
import io.tallyward.statistics.multiplicity.Dunnett;
import java.util.Optional;

/**
 * For reference, what several challengers would have to reach at one single look, all read together.
 *
 * @param bothSides whether it is for the size of z in either direction, or for a benefit alone
 * @param alpha family-wise level it holds
 * @param critical Dunnett's critical value, which knows that all are compared with the same control
 * @param evenSplit the critical value if alpha is merely split evenly
 */
record DunnettValue(boolean bothSides, double alpha, double critical, double evenSplit) {

    /** The values of a plan; empty with a single challenger. */
    static Optional<DunnettValue> of(Plan plan) {
        int challengers = plan.challengers().size();
        if (challengers < 2) {
            return Optional.empty();
        }
        double[] shares = plan.sharesIn(plan.epochs().size());
        Dunnett dunnett = Dunnett.of(
                shares[plan.variantIndex(plan.control().name())],
                plan.challengers().stream()
                        .map(Variant::name)
                        .mapToDouble(name -> shares[plan.variantIndex(name)])
                        .toArray());
        boolean both = plan.test().symmetric();
        double alpha = both ? plan.test().alpha() : plan.test().benefit().alpha();
        return Optional.of(new DunnettValue(
                both,
                alpha,
                both ? dunnett.twoSidedCriticalValue(alpha) : dunnett.oneSidedCriticalValue(alpha),
                Normal.upperQuantile(alpha / challengers / (both ? 2 : 1))));
    }
}
