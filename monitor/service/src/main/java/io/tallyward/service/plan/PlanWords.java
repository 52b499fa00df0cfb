package io.tallyward.service.plan;

import io.tallyward.engine.plan.CountRule.CountBy;
import io.tallyward.engine.plan.FutilityPlan;
import io.tallyward.engine.plan.FutilityPlan.Assumption;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.Tail;
import io.tallyward.engine.plan.TestPlan;
import java.math.BigDecimal;
import java.math.RoundingMode;
import java.util.Locale;

/** The parts of a plan in words, as commands print and pages show them. */
public final class PlanWords {

    private PlanWords() {}

    /** The name of a constant as plans have it. */
    public static String code(Enum<?> constant) {
        return constant.name().toLowerCase(Locale.ROOT).replace('_', '-');
    }

    /** What the trials of a plan are called. */
    public static String trials(Plan plan) {
        return countsViews(plan) ? "views" : "trials";
    }

    /** What its successes are called. */
    public static String successes(Plan plan) {
        return countsViews(plan) ? "clicked views" : "successes";
    }

    /** Whether a unit may have several trials. */
    public static boolean countsViews(Plan plan) {
        return plan.count().by() == CountBy.VIEW;
    }

    /** How a direction spends its error. */
    public static String spending(Tail tail) {
        return tail.spending().code()
                + (tail.silentBefore() > 0
                        ? ", nothing before " + shortest(tail.silentBefore()) + " of the clock"
                        : "");
    }

    /** What error is spent by. */
    public static String clock(TestPlan test) {
        return switch (test.clock()) {
            case INFORMATION -> "information: error is spent as information comes in";
            case CALENDAR -> "calendar: error is spent as the longest run passes";
        };
    }

    /** What the information fraction of a look is measured by. */
    public static String measure(Plan plan) {
        return switch (plan.test().measure()) {
            case OBSERVED ->
                countsViews(plan)
                        ? "observed: by the variance between units seen"
                        : "observed: by trials and the success rates seen";
            case TRIALS -> "trials: as if the success rates were those of the plan";
        };
    }

    /** When a benefit counts as unlikely, as the rest of a sentence. */
    public static String futility(FutilityPlan rule) {
        if (rule instanceof FutilityPlan.ErrorSpending errors) {
            return "the chance of missing the smallest effect is spent by "
                    + errors.spending().code();
        }
        if (rule instanceof FutilityPlan.ConditionalPower conditional) {
            return "when the chance to find a benefit at the planned end is below " + shortest(conditional.below())
                    + ", " + assumption(conditional.under());
        }
        return "when the chance to find a benefit at the planned end, averaged over what the data say, is below "
                + shortest(((FutilityPlan.PredictivePower) rule).below());
    }

    private static String assumption(Assumption assumption) {
        return switch (assumption) {
            case TREND -> "if the effect seen so far goes on";
            case DESIGN -> "if the effect is the smallest worth finding";
            case NONE -> "if there is no effect";
        };
    }

    /** A figure of the plan without the noise of binary arithmetic. */
    public static String shortest(double value) {
        return BigDecimal.valueOf(value)
                .setScale(9, RoundingMode.HALF_EVEN)
                .stripTrailingZeros()
                .toPlainString();
    }
}
