/**
 * Does the traffic arrive in the proportions that were planned? If not, trials are being lost or misassigned, and no
 * comparison of the variants means much.
 *
 * <p>The watch reads the counts after every window, so its test must hold however often it is read: a Bayes factor
 * against the planned split, which without a mismatch exceeds 1/alpha at any time with probability alpha at most.
 * Pearson's chi-square stands beside it because everybody knows it; it is valid for one reading only.
 *
 * <p>Once there is a mismatch, people ask since when and where: {@link
 * io.tallyward.statistics.split.SplitChangePoint} names the window it began with, {@link
 * io.tallyward.statistics.split.WorstSegment} the segment that shows it most. Neither decides whether there is one.
 */
package io.tallyward.statistics.split;
