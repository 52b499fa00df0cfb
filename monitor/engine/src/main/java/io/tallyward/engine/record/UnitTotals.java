package io.tallyward.engine.record;

/**
 * What a variance between units needs beside trials and successes: sums over units, {@code x} being the views of a unit and
 * {@code y} those with a click.
 *
 * @param units units with at least one view
 * @param trialSquares sum of x^2
 * @param products sum of x y
 * @param successSquares sum of y^2
 */
public record UnitTotals(long units, long trialSquares, long products, long successSquares) {}
