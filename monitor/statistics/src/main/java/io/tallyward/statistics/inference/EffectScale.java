package io.tallyward.statistics.inference;

/**
 * From drifts to differences of rates and back. Relative information is {@code t = I / I_max}, where {@code I} is one over
 * the squared standard error of the difference, and {@code z = difference sqrt(I)}. The drift is the expected z at t = 1,
 * hence {@code drift = difference sqrt(I_max)} and, for the naive estimates,
 * {@code z / sqrt(t I_max) = z / sqrt(I)}, the observed difference.
 *
 * @param maximumInformation the information I_max that counts as 1, in [1e-100, 1e100]; for a difference of rates in
 *     squared units of one over a rate
 */
public record EffectScale(double maximumInformation) {

    private static final double LEAST = 1e-100;
    private static final double MOST = 1e100;

    public EffectScale {
        if (!(maximumInformation >= LEAST && maximumInformation <= MOST)) {
            throw new IllegalArgumentException(
                    "maximumInformation: " + maximumInformation + " (expected: in [" + LEAST + ", " + MOST + "])");
        }
    }

    /**
     * The difference of rates, variant minus control, that a drift stands for.
     *
     * @param drift expected z at information 1; an infinity gives itself
     */
    public double riskDifference(double drift) {
        return requireNumber("drift", drift) / StrictMath.sqrt(maximumInformation);
    }

    /**
     * The drift of a difference of rates.
     *
     * @param riskDifference variant minus control; an infinity gives itself
     */
    public double drift(double riskDifference) {
        return requireNumber("riskDifference", riskDifference) * StrictMath.sqrt(maximumInformation);
    }

    /** An interval for the drift as one for the difference of rates. */
    public Interval riskDifference(Interval drift) {
        return drift.map(this::riskDifference);
    }

    /** An estimate of the drift as one of the difference of rates. Not truncated to [-1, 1]. */
    public Estimate riskDifference(Estimate drift) {
        return new Estimate(riskDifference(drift.value()), riskDifference(drift.interval()));
    }

    private static double requireNumber(String name, double value) {
        if (Double.isNaN(value)) {
            throw new IllegalArgumentException(name + ": NaN (expected: a number or an infinity)");
        }
        return value;
    }
}
