package io.tallyward.engine.decide;

import io.tallyward.engine.plan.FutilityPlan;
import io.tallyward.engine.plan.LookSchedule;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.Spending;
import io.tallyward.engine.plan.TestPlan;
import io.tallyward.engine.plan.TestPlan.Better;
import io.tallyward.engine.plan.TestPlan.Sides;
import io.tallyward.engine.plan.Variant;
import io.tallyward.statistics.boundary.BoundarySequence;
import io.tallyward.statistics.boundary.Design;
import io.tallyward.statistics.boundary.DesignRequest;
import io.tallyward.statistics.boundary.Look;
import io.tallyward.statistics.proportion.SampleSize;
import io.tallyward.statistics.spending.SpendingFunction;
import java.util.ArrayList;
import java.util.LinkedHashMap;
import java.util.List;
import java.util.Map;

/**
 * What a plan means for one challenger before any data: its planned looks with their boundaries, and how much information
 * the comparison needs.
 *
 * @param alpha level of the comparison, both tails together
 * @param tailLevel level of one tail
 * @param twoSided whether harm is tested beside benefit
 * @param spending the spending function of each tail
 * @param looks planned looks; a tail that spends nothing at a look has an infinite boundary there
 * @param drift expected z at full information under the smallest effect worth finding
 * @param inflation maximum information over that of a test with a single look
 * @param maximumInformation information at which the last look is due, (drift / smallest effect)^2
 * @param trials planned trials of the control and of the challenger, by variant
 */
public record PlanDesign(
        double alpha,
        double tailLevel,
        boolean twoSided,
        SpendingFunction spending,
        List<Look> looks,
        double drift,
        double inflation,
        double maximumInformation,
        Map<String, Long> trials) {

    /**
     * With more planned looks than this, drift and inflation are computed for this many equally spaced ones: beyond it
     * they change by less than one part in two hundred, which is small against the guess of the baseline.
     */
    private static final int LOOKS_FOR_DESIGN = 60;

    /** The design of one challenger of a plan. */
    public static PlanDesign of(Plan plan, Variant challenger) {
        TestPlan test = plan.test();
        double alpha = plan.alphaPerComparison();
        double tailLevel = test.tailAlpha(alpha);
        SpendingFunction spending = spendingFunction(test.spending());
        Design design = Design.of(new DesignRequest(
                tailLevel,
                test.sides() == Sides.TWO,
                spending,
                test.power(),
                fractionsForDesign(plan),
                plan.futility().map(FutilityPlan::spending).map(PlanDesign::spendingFunction)));
        double[] finalShares = plan.sharesIn(plan.epochs().size());
        double effect = test.better() == Better.HIGHER ? test.smallestEffect() : -test.smallestEffect();
        SampleSize size = SampleSize.of(
                SampleSize.maximumInformation(design.drift(), effect),
                test.baseline(),
                effect,
                finalShares[plan.variantIndex(plan.control().name())],
                finalShares[plan.variantIndex(challenger.name())]);
        Map<String, Long> trials = new LinkedHashMap<>();
        trials.put(plan.control().name(), size.controlTrials());
        trials.put(challenger.name(), size.variantTrials());
        return new PlanDesign(
                alpha,
                tailLevel,
                test.sides() == Sides.TWO,
                spending,
                plannedLooks(plan, spending, tailLevel),
                design.drift(),
                design.inflation(),
                size.maximumInformation(),
                trials);
    }

    /** The spending function a plan names. */
    public static SpendingFunction spendingFunction(Spending spending) {
        return switch (spending.family()) {
            case OBRIEN_FLEMING -> SpendingFunction.obrienFlemingType();
            case POCOCK -> SpendingFunction.pocockType();
            case HWANG_SHIH_DECANI -> SpendingFunction.hwangShihDecani(spending.parameter());
            case KIM_DEMETS -> SpendingFunction.kimDemets(spending.parameter());
        };
    }

    /** Planned information fractions: the plan's own, or equal steps when it looks at regular times. */
    public static double[] plannedFractions(Plan plan) {
        if (plan.looks() instanceof LookSchedule.AtFractions fractions) {
            return fractions.fractions().stream()
                    .mapToDouble(Double::doubleValue)
                    .toArray();
        }
        return equalSteps(lookCount(plan));
    }

    private static int lookCount(Plan plan) {
        long interval = ((LookSchedule.Every) plan.looks()).interval().toMillis();
        return Math.toIntExact((plan.run().atMost().toMillis() + interval - 1) / interval);
    }

    private static double[] equalSteps(int count) {
        double[] fractions = new double[count];
        for (int i = 0; i < count; i++) {
            fractions[i] = (i + 1.0) / count;
        }
        return fractions;
    }

    private static double[] fractionsForDesign(Plan plan) {
        double[] planned = plannedFractions(plan);
        return planned.length <= LOOKS_FOR_DESIGN ? planned : equalSteps(LOOKS_FOR_DESIGN);
    }

    private static List<Look> plannedLooks(Plan plan, SpendingFunction spending, double tailLevel) {
        BoundarySequence sequence = new BoundarySequence();
        List<Look> looks = new ArrayList<>();
        for (double fraction : plannedFractions(plan)) {
            TailSpending spent =
                    TailSpending.at(plan, spending.spent(tailLevel, fraction), benefitIsOpen(plan, looks.size() + 1));
            looks.add(sequence.next(fraction, spent.upper(), spent.lower()));
        }
        return looks;
    }

    /** Whether the benefit tail may spend at a planned look; looks planned by fractions have no planned time. */
    private static boolean benefitIsOpen(Plan plan, int look) {
        return !(plan.looks() instanceof LookSchedule.Every every)
                || every.interval().multipliedBy(look).compareTo(plan.run().atLeast()) >= 0;
    }
}
