package io.tallyward.engine.record;

/**
 * How likely a benefit still is to be found at a single last look at full information, on what is assumed about the effect
 * from here on. A description, not a decision.
 *
 * @param underTrend if the effect seen so far goes on
 * @param underDesign if the effect is the smallest one worth finding
 * @param withoutEffect if there is none
 * @param predictive averaged over what the data say about the effect so far (flat prior)
 */
public record Outlook(double underTrend, double underDesign, double withoutEffect, double predictive) {}
