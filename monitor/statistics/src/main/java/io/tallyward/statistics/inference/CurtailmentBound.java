package io.tallyward.statistics.inference;

import io.tallyward.statistics.distribution.Normal;

/**
 * The statistic at which the chance of success at a single last look has fallen to a threshold: conditional and predictive
 * power solved for z, as a futility bound that can stand beside the boundaries.
 *
 * <p>With information t so far, the last look at 1 with boundary c, drift theta and q the threshold's normal quantile:
 * conditional power {@code Phi((z sqrt t + theta (1 - t) - c) / sqrt(1 - t))} gives
 * {@code z = (c + q sqrt(1 - t) - theta (1 - t)) / sqrt t}; under the trend, {@code theta = z / sqrt t}, it gives
 * {@code z = sqrt t (c + q sqrt(1 - t))}; predictive power with a flat prior,
 * {@code Phi((z / sqrt t - c) sqrt(t / (1 - t)))}, gives {@code z = sqrt t c + q sqrt(1 - t)}. Sources as for
 * {@link ConditionalPower}, of which these are the inverse to 1e-12.
 */
public final class CurtailmentBound {

    private CurtailmentBound() {}

    /**
     * Where conditional power under a given drift is {@code power}.
     *
     * @param information information so far relative to that of the last look, in (0, 1)
     * @param critical boundary of the last look for z; finite
     * @param drift expected z at the last look
     * @param power the threshold, in (0, 1)
     */
    public static double conditional(double information, double critical, double drift, double power) {
        StagewiseInference.requireDrift(drift);
        double ahead = 1 - requireInformation(information);
        return (requireCritical(critical) + quantile(power) * StrictMath.sqrt(ahead) - drift * ahead)
                / StrictMath.sqrt(information);
    }

    /** Where conditional power is {@code power} if the trend so far goes on. */
    public static double underTrend(double information, double critical, double power) {
        double ahead = 1 - requireInformation(information);
        return StrictMath.sqrt(information) * (requireCritical(critical) + quantile(power) * StrictMath.sqrt(ahead));
    }

    /** Where predictive power with a flat prior is {@code power}. */
    public static double predictive(double information, double critical, double power) {
        double ahead = 1 - requireInformation(information);
        return StrictMath.sqrt(information) * requireCritical(critical) + quantile(power) * StrictMath.sqrt(ahead);
    }

    private static double requireInformation(double information) {
        if (!(information > 0 && information < 1)) {
            throw new IllegalArgumentException("information: " + information + " (expected: in (0, 1))");
        }
        return information;
    }

    private static double requireCritical(double critical) {
        if (!(StrictMath.abs(critical) <= StagewiseInference.MOST_Z)) {
            throw new IllegalArgumentException("critical: " + critical + " (expected: in [-1e6, 1e6])");
        }
        return critical;
    }

    private static double quantile(double power) {
        if (!(power > 0 && power < 1)) {
            throw new IllegalArgumentException("power: " + power + " (expected: in (0, 1))");
        }
        return Normal.quantile(power);
    }
}
