package io.tallyward.engine.plan;

/**
 * Non-binding futility: the owner may be told that a benefit has become unlikely, and may carry on regardless without
 * raising the false-alarm rate.
 *
 * @param spending how the type II error (1 - power) is spent over the looks
 */
public record FutilityPlan(Spending spending) {}
