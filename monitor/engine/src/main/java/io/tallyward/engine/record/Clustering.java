package io.tallyward.engine.record;

/**
 * What it means for one look that the views of a unit are not independent.
 *
 * @param independentZ pooled two-proportion statistic, stratified by epoch, as if every view were a trial of its own; for
 *     comparison only, no decision rests on it
 * @param designEffect variance of the difference between units over the one that independent views would have; positive,
 *     above 1 where views of a unit resemble each other
 */
public record Clustering(double independentZ, double designEffect) {}
