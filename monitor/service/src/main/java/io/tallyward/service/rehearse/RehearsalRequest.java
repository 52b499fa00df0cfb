package io.tallyward.service.rehearse;

import java.util.OptionalLong;

/**
 * What to rehearse.
 *
 * @param runs how often, from 1
 * @param seed where chance starts; same seed, same result
 * @param rates true success rate of every variant, in the plan's order, each in (0, 1)
 * @param perDay units exposed per day, all variants together; without it as many as reach the planned trials at the end of
 *     the run
 * @param fixedSplit whether the split is as planned, to a unit, instead of at random
 * @param estimates whether estimates and intervals are checked as well
 * @param threads how many threads share the work, from 1; the result does not depend on it
 */
public record RehearsalRequest(
        long runs, long seed, double[] rates, OptionalLong perDay, boolean fixedSplit, boolean estimates, int threads) {

    public RehearsalRequest {
        if (!(runs >= 1)) {
            throw new IllegalArgumentException("runs: " + runs + " (expected: 1 or more)");
        }
        if (!(threads >= 1)) {
            throw new IllegalArgumentException("threads: " + threads + " (expected: 1 or more)");
        }
        rates = rates.clone();
        for (double rate : rates) {
            if (!(rate > 0 && rate < 1)) {
                throw new IllegalArgumentException("rates: " + rate + " (expected: above 0 and below 1)");
            }
        }
    }

    /** A copy. */
    @Override
    public double[] rates() {
        return rates.clone();
    }
}
