package io.tallyward.statistics.boundary;

import io.tallyward.statistics.distribution.Normal;
import java.util.OptionalDouble;
import java.util.function.DoubleUnaryOperator;
import org.apache.commons.math3.analysis.UnivariateFunction;
import org.apache.commons.math3.analysis.solvers.BrentSolver;

/**
 * The drift that given boundaries find with a given power: the root of {@code P(upper boundary crossed first) = power}
 * (Jennison and Turnbull, "Group Sequential Methods", 2000, section 2.3; recalled).
 */
public final class DriftForPower {

    /** Absolute accuracy of the drift; power is then right to about as many digits. */
    private static final double DRIFT_ACCURACY = 1e-11;

    private static final int MOST_EVALUATIONS = 100;

    /** Five are usual. */
    private static final int MOST_SECANT_STEPS = 10;

    /** The error after a secant step is below the product of the last two, in standard errors. */
    private static final double CLOSE = 1e-13;

    /** Quantiles are cut off here, where tail probabilities underflow. */
    private static final double FARTHEST = 38;

    /** Expected z at the last look up to which a drift is sought. */
    private static final double MOST_EXPECTED = 12;

    /** Inflation is rarely above 1.4, which is 1.18 in drift: one step of this usually brackets it. */
    private static final double WIDENING = 1.2;

    /** A fixed-sample drift below this starts the search at 0. */
    private static final double NEXT_TO_NOTHING = 0.1;

    private DriftForPower() {}

    /**
     * Solves for the drift, accurate to 1e-10.
     *
     * @param information information of each look relative to the planned maximum, ascending
     * @param upper upper boundary of each look for z; positive infinity for none
     * @param lower lower boundary of each look for z; negative infinity for none; crossing it first is a failure
     * @param power probability of crossing an upper boundary first, below 1 and above the type I error of the upper
     *     boundaries
     * @return expected z at information 1; positive
     * @throws IllegalArgumentException if an argument is out of range, or if no drift has this power: boundaries that let
     *     too much through downwards, or an expected z above 12 at the last look
     */
    public static double of(double[] information, double[] upper, double[] lower, double power) {
        ExitProbabilities.requireLooks(information, upper, lower);
        ExitProfile profile = ExitProfile.of(information, upper, lower, 0, greatest(information));
        double level = profile.at(0).totalUpper();
        if (!(power > level && power < 1)) {
            throw new IllegalArgumentException("power: " + power + " (expected: in (" + level
                    + ", 1), that is, above the " + "probability without any drift)");
        }
        double fixed = Normal.upperQuantile(level) + Normal.quantile(power);
        DoubleUnaryOperator powerAt = theta -> profile.upward(theta).probability();
        double root = StrictMath.sqrt(information[information.length - 1]);
        // Next to the level the drift is next to nothing, and half of nothing would not be below it for sure.
        return fixed > NEXT_TO_NOTHING
                ? root(powerAt, power, fixed, information)
                : bracketed(surplus(powerAt, power), 0, NEXT_TO_NOTHING / root, information);
    }

    /** Where the search for the drift ends: beyond it the power is as good as 1 unless next to nothing is spent. */
    static double greatest(double[] information) {
        return MOST_EXPECTED / StrictMath.sqrt(information[information.length - 1]);
    }

    /**
     * The drift at which a power is reached. Solved on the scale of quantiles, where the power of a single look is a straight
     * line in the drift and that of several is nearly one.
     *
     * @param powerAt the power as a function of the drift
     * @param fixed the drift that a single look at information 1 would need
     */
    static double root(DoubleUnaryOperator powerAt, double power, double fixed, double[] information) {
        // No sequential test beats the single test on the same information (Neyman and Pearson), so the search starts
        // there.
        double start =
                StrictMath.min(fixed / StrictMath.sqrt(information[information.length - 1]), greatest(information));
        UnivariateFunction surplus = surplus(powerAt, power);
        OptionalDouble quick = secant(surplus, start, information);
        return quick.isPresent() ? quick.getAsDouble() : bracketed(surplus, 0.5 * start, start, information);
    }

    private static UnivariateFunction surplus(DoubleUnaryOperator powerAt, double power) {
        double target = Normal.quantile(power);
        return drift -> quantile(powerAt.applyAsDouble(drift)) - target;
    }

    private static double quantile(double power) {
        double quantile = Normal.quantile(StrictMath.max(0, StrictMath.min(1, power)));
        return StrictMath.max(-FARTHEST, StrictMath.min(FARTHEST, quantile));
    }

    /** Gives up where the line bends too much. */
    private static OptionalDouble secant(UnivariateFunction surplus, double start, double[] information) {
        double root = StrictMath.sqrt(information[information.length - 1]);
        double greatest = greatest(information);
        double before = start;
        double atBefore = surplus.value(before);
        double move = -atBefore / root;
        for (int i = 0; i < MOST_SECANT_STEPS; i++) {
            double now = before + move;
            if (StrictMath.abs(move) * root < CLOSE) {
                return OptionalDouble.of(now);
            }
            if (!(now > 0 && now <= greatest)) {
                break;
            }
            double atNow = surplus.value(now);
            double next = -atNow * move / (atNow - atBefore);
            if (StrictMath.abs(next * move) * root * root < CLOSE) {
                return OptionalDouble.of(now + next);
            }
            before = now;
            atBefore = atNow;
            move = next;
        }
        return OptionalDouble.empty();
    }

    /** The root of a surplus, from an interval whose lower end is below it. */
    private static double bracketed(UnivariateFunction surplus, double from, double to, double[] information) {
        double greatest = greatest(information);
        double low = from;
        double high = StrictMath.min(to, greatest);
        while (surplus.value(high) < 0) {
            if (high == greatest) {
                throw new IllegalArgumentException(
                        "power: out of reach (expected: looks that may spend more error than these)");
            }
            low = high;
            high = StrictMath.min(WIDENING * high, greatest);
        }
        return new BrentSolver(0, DRIFT_ACCURACY, 0).solve(MOST_EVALUATIONS, surplus, low, high);
    }
}
