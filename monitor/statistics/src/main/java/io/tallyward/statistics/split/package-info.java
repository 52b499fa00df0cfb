/**
 * Does the traffic arrive in the proportions that were planned? If not, trials are being lost or misassigned, and no
 * comparison of the variants means much.
 *
 * <p>The watch reads the counts after every window, so its test must hold however often it is read: a Bayes factor
 * against the planned split, which without a mismatch exceeds 1/alpha at any time with probability alpha at most.
 * Pearson's chi-square stands beside it because everybody knows it; it is valid for one reading only. {@link io.tallyward.statistics.split.SequentialEvidence} is
 * what all readings so far come to, as a p-value.
 *
 * <p>Once there is a mismatch, people ask since when and where: {@link
 * io.tallyward.statistics.split.SplitChangePoint} names the window it began with, {@link
 * io.tallyward.statistics.split.WorstSegment} the segment that shows it most. Neither decides whether there is one.
 *
 * <p>What is out of its range, NaN included, is refused with an IllegalArgumentException that reads {@code name: value
 * (expected: range)}. Everything here is a value or a pure function, and thread-safe.
 */
package io.tallyward.statistics.split;
