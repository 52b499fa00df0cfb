/**
 * From counts to a comparison of two proportions: the statistic that is held against boundaries, the difference it speaks
 * of, and the information it carries.
 *
 * <p>Counts come in strata, one for each period of constant allocation. Pooling over periods in which the split changed
 * can turn a benefit into a harm (Simpson's paradox); comparing within each and then adding up cannot. Products of counts
 * are formed exactly before they become doubles, so that trillions of trials are as safe as tens.
 */
package io.tallyward.statistics.proportion;
