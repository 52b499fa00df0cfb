/**
 * Several questions, one error rate: how to share alpha among comparisons so that the probability of any false rejection
 * stays below it.
 *
 * <p>Splitting alpha evenly is always valid. {@link io.tallyward.statistics.multiplicity.AlphaGraph} wastes less: what a
 * rejected hypothesis no longer needs is passed on to the others, also between the looks of a sequential test. {@link
 * io.tallyward.statistics.multiplicity.Dunnett} uses that comparisons with one control are correlated; it is exact, but for
 * a single look. {@link io.tallyward.statistics.multiplicity.AdjustedProbability} restates p-values so that each can be
 * held against alpha itself.
 *
 * <p>What is out of its range, NaN included, is refused with an IllegalArgumentException that reads {@code name: value
 * (expected: range)}. Everything here is a value or a pure function, and thread-safe.
 */
package io.tallyward.statistics.multiplicity;
