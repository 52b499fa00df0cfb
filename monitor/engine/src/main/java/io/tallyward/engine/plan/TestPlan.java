package io.tallyward.engine.plan;

import java.util.Optional;

/**
 * The test of each challenger against the control.
 *
 * @param benefit how a benefit is tested
 * @param harm how harm is tested; empty when only a benefit can be found
 * @param sharing what becomes of the level of a challenger whose verdict is a stop, if there are several
 * @param clock what the spending of error goes by
 * @param measure what the information fraction of a look is measured by
 * @param power probability to find an effect of the smallest size of interest, in (0.5, 1)
 * @param baseline assumed success rate of the control, in (0, 1)
 * @param smallestEffect smallest absolute difference of success rates worth finding; positive
 * @param better which direction is a benefit
 * @param minimumPerCell least number of successes and of failures in each variant before the first look
 */
public record TestPlan(
        Tail benefit,
        Optional<Tail> harm,
        AlphaSharing sharing,
        SpendingClock clock,
        InformationMeasure measure,
        double power,
        double baseline,
        double smallestEffect,
        Better better,
        int minimumPerCell) {

    /** Five successes and five failures in each variant: common practice for a normal approximation. */
    public static final int DEFAULT_MINIMUM_PER_CELL = 5;

    /** Whether harm is tested beside benefit. */
    public enum Sides {
        ONE,
        TWO
    }

    /** Which direction of the difference (variant minus control) is a benefit. */
    public enum Better {
        HIGHER,
        LOWER
    }

    /** What becomes of the level of a challenger that has been found to be a benefit or to do harm. */
    public enum AlphaSharing {
        /**
         * Direction by direction it passes to the challengers not found in that direction, ended or not, evenly (Holm 1979;
         * Maurer and Bretz 2013).
         */
        PASS_ON,
        /** Nothing: every challenger keeps its share (Bonferroni). */
        SPLIT
    }

    /** What the spending of error goes by. */
    public enum SpendingClock {
        /** The information fraction. */
        INFORMATION,
        /** The share of the longest run that has passed. */
        CALENDAR
    }

    /** What the information fraction of a look is measured by. */
    public enum InformationMeasure {
        /** The inverse variance of the difference, with the rates that were observed. */
        OBSERVED,
        /** The trials, as if the rates were those of the plan. */
        TRIALS
    }

    /**
     * A test with both directions alike and the defaults of a plan file.
     *
     * @param alpha family-wise level, both directions together; in (0, 0.5)
     */
    public static TestPlan of(
            double alpha, Sides sides, Spending spending, double power, double baseline, double smallestEffect) {
        Tail tail = Tail.of(sides == Sides.TWO ? alpha / 2 : alpha, spending);
        return new TestPlan(
                tail,
                sides == Sides.TWO ? Optional.of(tail) : Optional.empty(),
                AlphaSharing.PASS_ON,
                SpendingClock.INFORMATION,
                InformationMeasure.OBSERVED,
                power,
                baseline,
                smallestEffect,
                Better.HIGHER,
                DEFAULT_MINIMUM_PER_CELL);
    }

    /** The family-wise level, both directions together. */
    public double alpha() {
        return benefit.alpha() + harm.map(Tail::alpha).orElse(0.0);
    }

    public Sides sides() {
        return harm.isPresent() ? Sides.TWO : Sides.ONE;
    }

    /** Whether both directions are tested alike. */
    public boolean symmetric() {
        return harm.isPresent() && harm.get().equals(benefit);
    }

    /** The smallest difference of variant minus control worth finding, negative when a lower rate is better. */
    public double signedEffect() {
        return better == Better.HIGHER ? smallestEffect : -smallestEffect;
    }
}
