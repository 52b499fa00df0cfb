package io.tallyward.engine.record;

/**
 * What may be said about the effect once a comparison has crossed a boundary or used up what was planned, adjusted for the looks that were taken: by the stage-wise
 * ordering, in which an earlier crossing is more extreme. The point estimates are median-unbiased. After a stop for
 * futility there are none: the rule is not binding and no boundary was crossed, so that only the repeated interval holds.
 *
 * @param pValue at most the level of the comparison exactly if a boundary was crossed; the p-value of the likelier direction,
 *     weighted by that direction's share of the level (twice it in a symmetric test)
 * @param level confidence level of the intervals; each end has the error of its own direction
 * @param drift expected z at full information
 * @param difference difference of rates, variant minus control
 * @param lift difference relative to the control's rate, null while the control has no success
 */
public record Adjusted(double pValue, double level, Estimated drift, Estimated difference, Estimated lift) {}
