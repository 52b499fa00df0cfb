package io.tallyward.service.rehearse;

import io.tallyward.statistics.proportion.Interval;
import io.tallyward.statistics.proportion.ScoreInterval;

/**
 * How often something happened in simulated runs.
 *
 * @param count in how many of them, at most {@code of}
 * @param of in how many it could have happened; at least 1
 */
public record Rate(long count, long of) {

    private static final double CONFIDENCE = 0.95;

    public Rate {
        if (!(count >= 0 && count <= of && of >= 1)) {
            throw new IllegalArgumentException(
                    "count: " + count + " of " + of + " (expected: 0 <= count <= of, of at least 1)");
        }
    }

    /** The share, in [0, 1]. */
    public double value() {
        return (double) count / of;
    }

    /** Monte Carlo standard error of the share, {@code sqrt(p (1 - p) / n)}; 0 when it happened never or always. */
    public double standardError() {
        return StrictMath.sqrt(value() * (1 - value()) / of);
    }

    /** The 95 % score interval of the share (see {@link ScoreInterval#wilson}). */
    public Interval interval() {
        return ScoreInterval.wilson(count, of, CONFIDENCE).orElseThrow();
    }
}
