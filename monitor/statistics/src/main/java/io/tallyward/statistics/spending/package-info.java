/**
 * How an error probability is spent over the run of an experiment (Lan and DeMets 1983): a spending function says how
 * much of a level may have been used up once a given fraction of the planned information is in. The looks themselves
 * need not be planned; only the function must be.
 *
 * <p>Functions are evaluated at the level of <em>one tail</em>. A two-sided test at level alpha spends {@code alpha/2} in
 * each tail, each by the function at level {@code alpha/2}. This matters for the O'Brien-Fleming type, which does not
 * scale with its level.
 *
 * <p>Beside the published families the owner may write the spending down point by point
 * ({@link io.tallyward.statistics.spending.SpendingFunction#table}), and may keep any function silent at first
 * ({@link io.tallyward.statistics.spending.SpendingFunction#startingAt}). The fraction need not be one of information: a
 * function of elapsed time serves as well (Lan and DeMets, "Group sequential procedures: calendar versus information
 * time", Statistics in Medicine 8 (1989) 1191-1198, recalled), as boundaries ask only for what has been spent.
 *
 * <p>What is out of its range, NaN included, is refused with an IllegalArgumentException that reads {@code name: value
 * (expected: range)}. Everything here is a value or a pure function, and thread-safe.
 */
package io.tallyward.statistics.spending;
