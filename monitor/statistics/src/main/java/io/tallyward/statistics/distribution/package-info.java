/**
 * The standard normal law, both tails to the edge of what a double can hold.
 *
 * <p>Early looks of a cautious design ask for boundaries ten and more standard deviations out, where one minus the
 * distribution function is zero in floating point long before the probability is. So each tail is computed on its own,
 * never as one minus the other, and quantiles are solved on the logarithm of the tail.
 *
 * <p>Everything here uses {@link java.lang.StrictMath}: the same arguments give the same bits on every machine, which is
 * what lets a decision record be checked elsewhere.
 *
 * <p>What is out of its range, NaN included, is refused with an IllegalArgumentException that reads {@code name: value
 * (expected: range)}. Everything here is a value or a pure function, and thread-safe.
 */
package io.tallyward.statistics.distribution;
