package io.tallyward.service.command;

import io.tallyward.engine.decide.PlanDesign;
import io.tallyward.engine.plan.LookSchedule;
import io.tallyward.engine.plan.Plan;
import io.tallyward.statistics.boundary.Look;
import java.util.List;
import java.util.Locale;
import java.util.Optional;

/** The first looks of a long plan, at which hardly anything can stop it, and what it would cost to look less often. */
final class IdleLooks {

    /** A chance to have stopped that is smaller than this is as good as none. */
    private static final double LEAST_CHANCE = 0.001;

    /** Fewer idle looks than this are no reason to change a plan. */
    private static final int LEAST_LOOKS = 5;

    /** Looks of the plan to compare with, at most; more gain little (Pocock 1982, recalled). */
    private static final int FEWER = 14;

    private IdleLooks() {}

    /** The remark on a comparison; empty if too few looks are idle to speak of. */
    static Optional<String> remark(PlannedComparison comparison) {
        List<Look> looks = comparison.looks();
        int idle = 0;
        while (idle < looks.size() && isIdle(comparison, idle)) {
            idle++;
        }
        if (idle < LEAST_LOOKS) {
            return Optional.empty();
        }
        return Optional.of(String.format(
                Locale.ROOT,
                "the first %d of the %d looks could only stop on a difference of more than %.2f points%s.",
                idle,
                looks.size(),
                100 * difference(comparison, idle - 1),
                fewer(comparison)));
    }

    private static boolean isIdle(PlannedComparison comparison, int index) {
        return comparison.scenarios().stream()
                .limit(2)
                .map(PlannedComparison.Scenario::obeyed)
                .allMatch(chances ->
                        chances.benefit()[index] + chances.harm()[index] + chances.futility()[index] < LEAST_CHANCE);
    }

    /** The least difference at which one of two boundaries is met. */
    private static double difference(PlannedComparison comparison, int index) {
        Look look = comparison.looks().get(index);
        PlannedPath path = comparison.path();
        return Math.min(
                Math.abs(comparison.difference(path.benefit(index), look)),
                Math.abs(comparison.difference(path.harm(index), look)));
    }

    private static String fewer(PlannedComparison comparison) {
        if (!(comparison.plan().looks() instanceof LookSchedule.Every every)
                || comparison.looks().size() <= FEWER) {
            return "";
        }
        int factor = (comparison.looks().size() + FEWER - 1) / FEWER;
        Plan plan = comparison.plan();
        Plan rarer = new Plan(
                plan.experiment(),
                plan.question(),
                plan.owner(),
                plan.count(),
                plan.variants(),
                plan.test(),
                new LookSchedule.Every(every.interval().multipliedBy(factor)),
                plan.futility(),
                plan.splitCheck(),
                plan.trust(),
                plan.run(),
                plan.epochs());
        PlannedComparison other = new PlannedComparison(
                rarer, comparison.challenger(), PlanDesign.of(rarer, comparison.challenger()), Optional.empty());
        return String.format(
                Locale.ROOT,
                "; %d looks would need %,d trials instead of %,d, and with the smallest effect end after %,.0f on average"
                        + " instead of %,.0f",
                other.looks().size(),
                other.plannedTrials(),
                comparison.plannedTrials(),
                expected(other),
                expected(comparison));
    }

    private static double expected(PlannedComparison comparison) {
        PlannedComparison.Scenario effect = comparison.underSmallestEffect();
        return effect.trials(effect.obeyed());
    }
}
