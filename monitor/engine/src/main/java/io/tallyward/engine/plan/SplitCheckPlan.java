package io.tallyward.engine.plan;

/**
 * The watch over the traffic split.
 *
 * @param alpha level of the sequential sample-ratio test over the whole run, in (0, 0.5)
 */
public record SplitCheckPlan(double alpha) {

    /** One false alarm in a thousand experiments: low, because a mismatch withholds every verdict. */
    public static final double DEFAULT_ALPHA = 0.001;
}
