package io.tallyward.statistics.inference;

/**
 * From a difference of rates to a relative lift {@code R = p1 / p0 - 1}, to first order (the delta method).
 *
 * <p>With variances {@code v1, v0} of the two observed rates, the difference has variance {@code v1 + v0} and the lift
 * {@code (v1 + (1 + R)^2 v0) / p0^2}. So an interval for the difference turns into one for the lift by dividing by
 * {@code p0} and widening about the estimate by {@code sqrt((v1 + (1 + R)^2 v0) / (v1 + v0))}: the uncertainty of the rate
 * that is divided by. For an interval of {@code z} standard errors about the observed difference, {@code 1 + R} then has
 * the standard error of Katz, Baptista, Azen and Pike, Biometrics 34 (1978) 469-474, recalled, times itself.
 *
 * <p>Good while {@code sqrt(v0)} is small against {@code p0}, say a tenth. The test is about the difference: for a result at
 * the edge the interval for the lift may hold 0 when the one for the difference just does not, or the other way round.
 * Limits are not truncated at -1.
 *
 * @param controlRate observed rate p0 of the control, in [1e-12, 1]
 * @param controlVariance squared standard error of {@code controlRate}, in [0, 1]
 * @param variantVariance squared standard error of the variant's rate, in [0, 1]; not 0 together with the control's
 */
public record LiftScale(double controlRate, double controlVariance, double variantVariance) {

    private static final double LEAST_RATE = 1e-12;

    public LiftScale {
        if (!(controlRate >= LEAST_RATE && controlRate <= 1)) {
            throw new IllegalArgumentException(
                    "controlRate: " + controlRate + " (expected: in [" + LEAST_RATE + ", 1])");
        }
        requireVariance("controlVariance", controlVariance);
        requireVariance("variantVariance", variantVariance);
        if (!(controlVariance + variantVariance > 0)) {
            throw new IllegalArgumentException("controlVariance + variantVariance: 0 (expected: positive)");
        }
    }

    /**
     * The scale of two observed proportions, each with variance {@code p (1 - p) / n}.
     *
     * @param controlSuccesses in [1, controlTrials]
     * @param variantSuccesses in [0, variantTrials]
     */
    public static LiftScale ofCounts(
            long controlSuccesses, long controlTrials, long variantSuccesses, long variantTrials) {
        requireCounts("controlSuccesses", 1, controlSuccesses, "controlTrials", controlTrials);
        requireCounts("variantSuccesses", 0, variantSuccesses, "variantTrials", variantTrials);
        return new LiftScale(
                (double) controlSuccesses / controlTrials,
                variance(controlSuccesses, controlTrials),
                variance(variantSuccesses, variantTrials));
    }

    /**
     * The lift that a difference stands for, with its interval.
     *
     * @param riskDifference variant minus control: value in [-1, 1], ends of the interval may be infinite
     */
    public Estimate lift(Estimate riskDifference) {
        double difference = riskDifference.value();
        if (!(difference >= -1 && difference <= 1)) {
            throw new IllegalArgumentException("riskDifference: " + difference + " (expected: in [-1, 1])");
        }
        double ratio = 1 + difference / controlRate;
        double widening = StrictMath.sqrt(
                (variantVariance + ratio * ratio * controlVariance) / (variantVariance + controlVariance));
        return new Estimate(
                difference / controlRate,
                riskDifference.interval().map(end -> (difference + scaled(widening, end - difference)) / controlRate));
    }

    /** No widening at all leaves an open end open. */
    private static double scaled(double widening, double deviation) {
        return Double.isInfinite(deviation) ? deviation : widening * deviation;
    }

    private static double variance(long successes, long trials) {
        double rate = (double) successes / trials;
        return rate * ((double) (trials - successes) / trials) / trials;
    }

    private static void requireVariance(String name, double variance) {
        if (!(variance >= 0 && variance <= 1)) {
            throw new IllegalArgumentException(name + ": " + variance + " (expected: in [0, 1])");
        }
    }

    private static void requireCounts(String name, long least, long successes, String trialsName, long trials) {
        if (!(trials >= 1)) {
            throw new IllegalArgumentException(trialsName + ": " + trials + " (expected: 1 or more)");
        }
        if (!(successes >= least && successes <= trials)) {
            throw new IllegalArgumentException(
                    name + ": " + successes + " (expected: in [" + least + ", " + trials + "])");
        }
    }
}
