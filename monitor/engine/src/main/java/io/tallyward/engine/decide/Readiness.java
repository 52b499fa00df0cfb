package io.tallyward.engine.decide;

import io.tallyward.engine.plan.CountRule.CountBy;
import io.tallyward.engine.plan.Plan;
import io.tallyward.statistics.distribution.Normal;
import io.tallyward.statistics.proportion.NormalError;
import java.util.Locale;
import java.util.Optional;
import java.util.function.Supplier;

/** Whether the counts bear a look at one challenger. */
final class Readiness {

    /**
     * Least growth of the information fraction between two looks. Below it a look could find next to nothing that the one
     * before did not, and its boundary would need an ever finer quadrature.
     */
    static final double LEAST_GROWTH = 0.001;

    /** Ten times what boundaries can still tell apart. */
    private static final double LEAST_MOTION = 1e-5;

    /**
     * Per cent of a direction's level by which skewness may raise its error at a look. Small counts in arms of unequal size
     * make one tail heavier than the normal law says, and looks add their excesses up: with a tenth, ten Pocock looks at one arm
     * nine times the other stayed within the level of both directions in simulation; with a fifth they exceeded it.
     */
    static final int MOST_ERROR_PERCENT = 10;

    /**
     * Least number of units in an arm of a plan that counts views, each weighted by its views (Kish's effective number). Common
     * practice asks for forty or fifty clusters before a variance between them is relied upon; twice that, as looks add their
     * errors up and as it keeps every unit below a tenth of its arm's views.
     */
    static final int LEAST_EFFECTIVE_UNITS = 100;

    /** Why there is no look though there are counts enough. */
    static final String NOTHING_VARIES = "the counts do not vary within the variants (a look needs some variation)";

    /** Where skewness adds most to a tail. */
    private static final double WORST_BOUNDARY = Math.sqrt(3);

    private final Plan plan;
    private final int variant;
    private final int control;

    Readiness(Plan plan, int variant) {
        this.plan = plan;
        this.variant = variant;
        control = plan.variantIndex(plan.control().name());
    }

    /**
     * Why an arm has too few successes or failures, if it has; common practice for a normal approximation. Where views are
     * counted, why it has too few units, or why too few of them have most of its views.
     */
    Optional<String> tooFew(CumulativeCounts counts) {
        int least = plan.test().minimumPerCell();
        for (int arm : new int[] {control, variant}) {
            long successes = counts.successes(arm);
            long failures = counts.trials(arm) - successes;
            if (successes < least || failures < least) {
                return Optional.of(String.format(
                        Locale.ROOT,
                        "%s has %d successes and %d failures (a look needs %d of each)",
                        plan.variants().get(arm).name(),
                        successes,
                        failures,
                        least));
            }
        }
        return plan.count().by() == CountBy.VIEW ? tooFewUnits(counts) : Optional.empty();
    }

    private Optional<String> tooFewUnits(CumulativeCounts counts) {
        for (int arm : new int[] {control, variant}) {
            double units = counts.effectiveUnits(arm);
            if (units < LEAST_EFFECTIVE_UNITS) {
                return Optional.of(String.format(
                        Locale.ROOT,
                        "the views of %s weigh as much as those of %.1f units with equally many each (a look needs %d)",
                        plan.variants().get(arm).name(),
                        units,
                        LEAST_EFFECTIVE_UNITS));
            }
        }
        return Optional.empty();
    }

    /** Whether information has hardly grown since the last look. */
    static boolean stands(double fraction, double before) {
        return fraction - before < LEAST_GROWTH;
    }

    /** Whether a clock on another scale has hardly moved: by less than a hundred-thousandth of its reading. */
    static boolean clockStands(double clock, double before) {
        return clock - before < LEAST_MOTION * clock;
    }

    /** The same in words. */
    static String standing(double fraction, double before) {
        if (fraction < before) {
            return String.format(
                    Locale.ROOT,
                    "the information fraction has fallen from %.4f to %.4f, as the rates have moved (a look needs %.3f more)",
                    before,
                    fraction,
                    LEAST_GROWTH);
        }
        return stands(fraction, before)
                ? String.format(
                        Locale.ROOT,
                        "the information fraction has grown from %.4f to %.4f only (a look needs %.3f more)",
                        before,
                        fraction,
                        LEAST_GROWTH)
                : "the counts since the last look carry next to no weight against those before (a look needs more of them)";
    }

    /**
     * Why the normal law is too far off for this look, if it is. Judged at the boundary that a first look with all the error
     * spent so far would have: no boundary of this look is closer. Skewness adds most at a distance of the root of three.
     *
     * @param skewness of the statistic without an effect
     * @param spent error the tails may have spent by this look
     * @param all error they may spend in all
     */
    Optional<String> tooSkew(double skewness, Supplier<TailSpending> spent, TailSpending all) {
        double largest = NormalError.tail(Math.abs(skewness), WORST_BOUNDARY);
        double least = Math.min(all.upper() > 0 ? all.upper() : 1, all.lower() > 0 ? all.lower() : 1);
        return 100 * largest <= MOST_ERROR_PERCENT * least ? Optional.empty() : skewed(skewness, spent.get(), all);
    }

    private static Optional<String> skewed(double skewness, TailSpending spent, TailSpending all) {
        double error = StrictMath.max(
                share(skewness, spent.upper(), all.upper()), share(-skewness, spent.lower(), all.lower()));
        return 100 * error > MOST_ERROR_PERCENT
                ? Optional.of(String.format(
                        Locale.ROOT,
                        "few successes in arms of unequal size: the error of a direction may exceed its level by %.0f %%",
                        100 * error))
                : Optional.empty();
    }

    private static double share(double skewness, double spent, double all) {
        return spent > 0
                ? NormalError.tail(skewness, StrictMath.max(WORST_BOUNDARY, Normal.upperQuantile(spent))) / all
                : 0;
    }
}
