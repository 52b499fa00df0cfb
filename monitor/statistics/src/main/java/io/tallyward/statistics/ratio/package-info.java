/**
 * Ratios of sums, such as clicks per view, where the unit that was assigned is not the unit that is counted.
 *
 * <p>A unit with a thousand views is one draw of the lottery, not a thousand. Counting its views as independent makes
 * differences look surer than they are, so here variances come from the spread between units. All that is needed of a
 * unit are its two numbers, and all that is needed of many are six sums. They are kept as whole numbers without bound, so
 * that partitions can be counted apart and added up in any order to the same result, bit for bit.
 *
 * <p>What is out of its range, NaN included, is refused with an IllegalArgumentException that reads {@code name: value
 * (expected: range)}. Everything here is a value or a pure function, and thread-safe.
 */
package io.tallyward.statistics.ratio;
