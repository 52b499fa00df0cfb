package io.tallyward.engine.plan;

import java.util.Locale;

/**
 * Non-binding futility: the owner may be told that a benefit has become unlikely, and may carry on regardless without
 * raising the false-alarm rate.
 */
public sealed interface FutilityPlan {

    /** The rule in one word or two, as records and digests name it. */
    String code();

    /**
     * Futile when less probability is left, under the smallest effect worth finding, than the type II error (1 - power)
     * allows by then.
     *
     * @param spending how the type II error is spent over the looks
     */
    record ErrorSpending(Spending spending) implements FutilityPlan {
        @Override
        public String code() {
            return spending.code();
        }
    }

    /**
     * Futile when the chance that a last look at full information finds a benefit falls below a threshold.
     *
     * @param below the threshold, in (0, 0.5]
     * @param under what is assumed about the effect from here on
     */
    record ConditionalPower(double below, Assumption under) implements FutilityPlan {
        @Override
        public String code() {
            return "conditional-power(" + below + " " + under.code() + ")";
        }
    }

    /**
     * The same, averaged over what the data say about the effect.
     *
     * @param below the threshold, in (0, 0.5]
     */
    record PredictivePower(double below) implements FutilityPlan {
        @Override
        public String code() {
            return "predictive-power(" + below + ")";
        }
    }

    /** What conditional power assumes about the effect from here on. */
    enum Assumption {
        /** The effect seen so far. */
        TREND,
        /** The smallest effect worth finding. */
        DESIGN,
        /** No effect. */
        NONE;

        /** The name used in plans and records. */
        public String code() {
            return name().toLowerCase(Locale.ROOT);
        }
    }
}
