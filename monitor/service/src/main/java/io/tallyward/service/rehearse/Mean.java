package io.tallyward.service.rehearse;

/**
 * The mean of something over simulated runs.
 *
 * @param value the mean
 * @param standardError its Monte Carlo standard error; 0 for a single run, from which none can be told
 * @param count number of runs it is the mean of; at least 1
 */
public record Mean(double value, double standardError, long count) {}
