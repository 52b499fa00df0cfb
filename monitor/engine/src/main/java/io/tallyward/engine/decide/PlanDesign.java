package io.tallyward.engine.decide;

import io.tallyward.engine.plan.FutilityPlan;
import io.tallyward.engine.plan.LookSchedule;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.Tail;
import io.tallyward.engine.plan.TestPlan;
import io.tallyward.engine.plan.TestPlan.Better;
import io.tallyward.engine.plan.Variant;
import io.tallyward.statistics.boundary.BoundarySequence;
import io.tallyward.statistics.boundary.Design;
import io.tallyward.statistics.boundary.DesignRequest;
import io.tallyward.statistics.boundary.DriftForPower;
import io.tallyward.statistics.boundary.Look;
import io.tallyward.statistics.distribution.Normal;
import io.tallyward.statistics.proportion.NormalError;
import io.tallyward.statistics.proportion.SampleSize;
import io.tallyward.statistics.proportion.Stratum;
import io.tallyward.statistics.spending.SpendingFunction;
import java.util.ArrayList;
import java.util.LinkedHashMap;
import java.util.List;
import java.util.Map;
import java.util.Optional;

/**
 * What a plan means for one challenger before any data: its planned looks with their boundaries, and how much information
 * the comparison needs. All at the level it starts with; what others may pass on to it later is a gain beyond the plan.
 *
 * @param benefitLevel level of the direction of benefit over all looks
 * @param harmLevel level of the direction of harm; 0 when harm is not tested
 * @param looks planned looks; a tail that spends nothing at a look has an infinite boundary there
 * @param drift expected z at full information under the smallest effect worth finding, towards the benefit
 * @param inflation maximum information over that of a test with a single look
 * @param maximumInformation information at which the last look is due, (drift / smallest effect)^2
 * @param pooledRate success rate of both arms together under the smallest effect
 * @param trials planned trials of the control and of the challenger, by variant
 */
public record PlanDesign(
        double benefitLevel,
        double harmLevel,
        List<Look> looks,
        double drift,
        double inflation,
        double maximumInformation,
        double pooledRate,
        Map<String, Long> trials) {

    /** A share of a duration, times it, is whole milliseconds but for rounding. */
    private static final double ROUNDING_MILLIS = 1;

    /** The design of one challenger of a plan. */
    public static PlanDesign of(Plan plan, Variant challenger) {
        TestPlan test = plan.test();
        TailLevels levels = TailLevels.initial(plan, plan.challengers().indexOf(challenger));
        double[] planned = plannedFractions(plan);
        List<Look> looks = plannedLooks(plan, levels, planned);
        double drift = drift(plan, levels, planned, looks);
        double fixed = Normal.upperQuantile(levels.benefit()) + Normal.quantile(test.power());
        double[] finalShares = plan.sharesIn(plan.epochs().size());
        SampleSize size = SampleSize.of(
                SampleSize.maximumInformation(drift, test.signedEffect()),
                test.baseline(),
                test.signedEffect(),
                finalShares[plan.variantIndex(plan.control().name())],
                finalShares[plan.variantIndex(challenger.name())]);
        Map<String, Long> trials = new LinkedHashMap<>();
        trials.put(plan.control().name(), size.controlTrials());
        trials.put(challenger.name(), size.variantTrials());
        return new PlanDesign(
                levels.benefit(),
                levels.harm(),
                looks,
                drift,
                (drift / fixed) * (drift / fixed),
                size.maximumInformation(),
                size.pooledRate(),
                trials);
    }

    /** Level of the comparison, both directions together. */
    public double alpha() {
        return benefitLevel + harmLevel;
    }

    /**
     * Boundary for a benefit at a single last look with full information after the first planned looks, on the scale on
     * which a benefit is positive.
     *
     * @param taken number of planned looks taken; the last of them below full information
     */
    public double critical(Plan plan, int taken) {
        TailSpending all = TailSpending.all(plan, new TailLevels(benefitLevel, harmLevel));
        Look last = BoundarySequence.resume(looks.subList(0, taken)).next(1, all.upper(), all.lower());
        return plan.test().better() == Better.HIGHER ? last.upper() : -last.lower();
    }

    /**
     * How many planned looks before the last are expected to wait, with the planned rates and trials, because few successes in
     * arms of unequal size would distort their error.
     */
    public int looksExpectedToWait(Plan plan, Variant challenger) {
        TailSpending all = TailSpending.all(plan, new TailLevels(benefitLevel, harmLevel));
        Readiness readiness = new Readiness(plan, plan.variantIndex(challenger.name()));
        long own = trials.get(challenger.name());
        long control = trials.get(plan.control().name());
        int waiting = 0;
        for (Look look : looks.subList(0, looks.size() - 1)) {
            Stratum expected = new Stratum(
                    Math.round(own * look.information() * pooledRate),
                    Math.round(own * look.information()),
                    Math.round(control * look.information() * pooledRate),
                    Math.round(control * look.information()));
            TailSpending spent = new TailSpending(look.upperSpent(), look.lowerSpent());
            waiting += readiness
                            .tooSkew(NormalError.skewness(List.of(expected)), () -> spent, all)
                            .isPresent()
                    ? 1
                    : 0;
        }
        return waiting;
    }

    /** Planned information fractions: the plan's own, or those of an even pace when it looks at regular times. */
    public static double[] plannedFractions(Plan plan) {
        if (plan.looks() instanceof LookSchedule.AtFractions fractions) {
            return fractions.fractions().stream()
                    .mapToDouble(Double::doubleValue)
                    .toArray();
        }
        LookSchedule.Every every = (LookSchedule.Every) plan.looks();
        double[] planned = new double[lookCount(plan)];
        for (int i = 0; i < planned.length; i++) {
            planned[i] = StrictMath.min(
                    1,
                    (i + 1.0)
                            * every.interval().toMillis()
                            / plan.run().atMost().toMillis());
        }
        return planned;
    }

    private static int lookCount(Plan plan) {
        long interval = ((LookSchedule.Every) plan.looks()).interval().toMillis();
        return Math.toIntExact((plan.run().atMost().toMillis() + interval - 1) / interval);
    }

    private static double drift(Plan plan, TailLevels levels, double[] planned, List<Look> looks) {
        Optional<SpendingFunction> futility = plan.futility()
                .filter(FutilityPlan.ErrorSpending.class::isInstance)
                .map(rule -> SpendingFunctions.of(((FutilityPlan.ErrorSpending) rule).spending()));
        if (futility.isPresent()) {
            return Design.of(new DesignRequest(
                            levels.benefit(),
                            plan.test().symmetric(),
                            benefitSpending(plan),
                            plan.test().power(),
                            planned,
                            futility))
                    .drift();
        }
        boolean higher = plan.test().better() == Better.HIGHER;
        return DriftForPower.of(
                planned,
                looks.stream()
                        .mapToDouble(look -> higher ? look.upper() : -look.lower())
                        .toArray(),
                looks.stream()
                        .mapToDouble(look -> higher ? look.lower() : -look.upper())
                        .toArray(),
                plan.test().power());
    }

    private static SpendingFunction benefitSpending(Plan plan) {
        Tail benefit = plan.test().benefit();
        double silent = plan.looks() instanceof LookSchedule.Every
                ? (double) plan.run().atLeast().toMillis() / plan.run().atMost().toMillis()
                : 0;
        return SpendingFunctions.of(benefit.spending()).startingAt(Math.max(silent, benefit.silentBefore()));
    }

    /** At an even pace the spending clock shows the information fraction, whatever it goes by. */
    private static List<Look> plannedLooks(Plan plan, TailLevels levels, double[] fractions) {
        BoundarySequence sequence = new BoundarySequence();
        List<Look> looks = new ArrayList<>();
        for (double fraction : fractions) {
            TailSpending spent = TailSpending.at(plan, levels, fraction, benefitIsOpen(plan, fraction));
            looks.add(sequence.next(fraction, spent.upper(), spent.lower()));
        }
        return looks;
    }

    /** Whether the benefit tail may spend at a planned look; looks planned by fractions have no planned time. */
    private static boolean benefitIsOpen(Plan plan, double fraction) {
        if (!(plan.looks() instanceof LookSchedule.Every)) {
            return true;
        }
        double elapsed = fraction * plan.run().atMost().toMillis();
        return fraction >= 1
                || elapsed + ROUNDING_MILLIS >= plan.run().atLeast().toMillis();
    }
}
