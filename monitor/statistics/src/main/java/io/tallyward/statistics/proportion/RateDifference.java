package io.tallyward.statistics.proportion;

import java.util.Optional;

/**
 * The difference of two success rates with its unpooled standard error: {@code d = p1 - p0}, {@code se^2 = p1 (1 - p1) /
 * n1 + p0 (1 - p0) / n0}, the textbook (Wald) form. Easy to explain, and too short for small counts or rates near 0 or 1:
 * {@link ScoreInterval} has better ones.
 *
 * @param value variant minus control, in [-1, 1]; rounded once
 * @param standardError 0 or more; 0 exactly if each arm's trials all ended alike. Relative error below 1e-14
 */
public record RateDifference(double value, double standardError) {

    public RateDifference {
        if (!(value >= -1 && value <= 1)) {
            throw new IllegalArgumentException("value: " + value + " (expected: in [-1, 1])");
        }
        if (!(standardError >= 0 && standardError <= 1)) {
            throw new IllegalArgumentException("standardError: " + standardError + " (expected: in [0, 1])");
        }
    }

    /**
     * Compares.
     *
     * @return empty while an arm has no trials
     */
    public static Optional<RateDifference> of(Stratum stratum) {
        double n1 = stratum.trials();
        double n0 = stratum.controlTrials();
        if (n1 == 0 || n0 == 0) {
            return Optional.empty();
        }
        double variance = variance(stratum.successes(), n1) + variance(stratum.controlSuccesses(), n0);
        double value = StratifiedComparison.crossDifference(stratum) / (n1 * n0);
        return Optional.of(new RateDifference(value, StrictMath.sqrt(variance)));
    }

    /** The difference in standard errors; empty if the standard error is 0. */
    public Optional<ZStatistic> z() {
        return standardError > 0 ? Optional.of(new ZStatistic(value / standardError)) : Optional.empty();
    }

    /**
     * The Wald interval {@code d -/+ z se}; not cut at -1 and 1, so that it shows where it is out of its depth.
     *
     * @param confidence coverage of both sides together, in (0, 1)
     */
    public Interval wald(double confidence) {
        double reach = Interval.deviations(confidence) * standardError;
        return new Interval(value - reach, value + reach);
    }

    private static double variance(double successes, double trials) {
        return successes / trials * ((trials - successes) / trials) / trials;
    }
}
