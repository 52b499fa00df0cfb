/**
 * From counts to a comparison of two proportions: the statistic that is held against boundaries, the difference it speaks
 * of, and the information it carries; and, beside it, what a single reading would say.
 *
 * <p>Counts come in strata, one for each period of constant allocation. Pooling over periods in which the split changed
 * can turn a benefit into a harm (Simpson's paradox); comparing within each and then adding up cannot. Products of counts
 * are formed exactly before they become doubles, so that trillions of trials are as safe as tens.
 *
 * <p>{@link io.tallyward.statistics.proportion.StratifiedComparison} is what decisions rest on. For one stratum there are
 * {@link io.tallyward.statistics.proportion.ZStatistic}, {@link io.tallyward.statistics.proportion.RateDifference}, {@link
 * io.tallyward.statistics.proportion.RateRatio} and the intervals of {@link
 * io.tallyward.statistics.proportion.ScoreInterval}; over strata {@link
 * io.tallyward.statistics.proportion.MantelHaenszelTest} and the estimates of a common effect. Guardrails, which must not
 * get worse by a {@link io.tallyward.statistics.proportion.Margin} or more, are judged by {@link
 * io.tallyward.statistics.proportion.NonInferiority} and planned by {@link
 * io.tallyward.statistics.proportion.MarginPlan}. Where the data say nothing
 * the answer is an empty optional, never a number.
 *
 * <p>What is out of its range, NaN included, is refused with an IllegalArgumentException that reads {@code name: value
 * (expected: range)}. Everything here is a value or a pure function, and thread-safe.
 */
package io.tallyward.statistics.proportion;
