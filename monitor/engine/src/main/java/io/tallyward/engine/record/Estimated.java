package io.tallyward.engine.record;

/**
 * An estimate with an interval.
 *
 * @param value the point estimate
 * @param lower lower end of the interval, null when unbounded
 * @param upper upper end of the interval, null when unbounded
 */
public record Estimated(double value, Double lower, Double upper) {}
