package io.tallyward.statistics.spending;

import io.tallyward.statistics.distribution.Normal;

/** What the families share: their ranges and their end points. Each supplies the shape in between. */
sealed interface SpendingFamily extends SpendingFunction
        permits SpendingFamily.ObrienFlemingType,
                SpendingFamily.PocockType,
                SpendingFamily.HwangShihDecani,
                SpendingFamily.KimDemets,
                SpendingTable,
                DelayedSpending {

    /** The shape, for a fraction strictly between 0 and 1. */
    double between(double level, double fraction);

    @Override
    default double spent(double level, double fraction) {
        if (!(level > 0 && level < 1)) {
            throw new IllegalArgumentException("level: " + level + " (expected: in (0, 1))");
        }
        if (!(fraction >= 0)) {
            throw new IllegalArgumentException("fraction: " + fraction + " (expected: 0 or more)");
        }
        if (fraction == 0) {
            return 0;
        }
        return fraction >= 1 ? level : StrictMath.min(level, between(level, fraction));
    }

    /**
     * {@code 2 (1 - Phi(z / sqrt t))} with {@code z} the upper {@code level/2} quantile: Lan and DeMets, "Discrete
     * sequential boundaries for clinical trials", Biometrika 70 (1983) 659-663,
     * <a href="https://doi.org/10.1093/biomet/70.3.659">doi</a>, their alpha-1.
     */
    record ObrienFlemingType() implements SpendingFamily {
        @Override
        public double between(double level, double fraction) {
            return 2 * Normal.survival(Normal.upperQuantile(level / 2) / StrictMath.sqrt(fraction));
        }
    }

    /** {@code level ln(1 + (e - 1) t)}: Lan and DeMets (1983), their alpha-2. */
    record PocockType() implements SpendingFamily {
        @Override
        public double between(double level, double fraction) {
            return level * StrictMath.log1p((StrictMath.E - 1) * fraction);
        }
    }

    /**
     * {@code level (1 - exp(-gamma t)) / (1 - exp(-gamma))}: Hwang, Shih and DeCani, "Group sequential designs using a
     * family of type I error probability spending functions", Statistics in Medicine 9 (1990) 1439-1445,
     * <a href="https://doi.org/10.1002/sim.4780091207">doi</a>.
     */
    record HwangShihDecani(double gamma) implements SpendingFamily {

        private static final double WIDEST = 40;

        public HwangShihDecani {
            if (!(gamma >= -WIDEST && gamma <= WIDEST)) {
                throw new IllegalArgumentException("gamma: " + gamma + " (expected: in [-40, 40])");
            }
        }

        @Override
        public double between(double level, double fraction) {
            return gamma == 0
                    ? level * fraction
                    : level * (StrictMath.expm1(-gamma * fraction) / StrictMath.expm1(-gamma));
        }
    }

    /**
     * {@code level t^rho}: Kim and DeMets, "Design and analysis of group sequential tests based on the type I error
     * spending rate function", Biometrika 74 (1987) 149-154, <a href="https://doi.org/10.1093/biomet/74.1.149">doi</a>.
     */
    record KimDemets(double rho) implements SpendingFamily {

        private static final double GREATEST = 100;

        public KimDemets {
            if (!(rho > 0 && rho <= GREATEST)) {
                throw new IllegalArgumentException("rho: " + rho + " (expected: in (0, 100])");
            }
        }

        @Override
        public double between(double level, double fraction) {
            return level * StrictMath.pow(fraction, rho);
        }
    }
}
