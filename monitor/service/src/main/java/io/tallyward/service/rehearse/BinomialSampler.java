package io.tallyward.service.rehearse;

import java.util.random.RandomGenerator;

/**
 * Draws from a binomial distribution in time that does not grow with the number of trials. With {@code m} the smaller of
 * the expected successes and failures: below {@value #INVERSION_BELOW} by inversion, adding up probabilities from 0
 * (Kachitvichyanukul and Schmeiser, "Binomial random variate generation", Communications of the ACM 31 (1988) 216-222,
 * algorithm BINV); from there on by transformed rejection with squeeze (Hörmann, "The generation of binomial random
 * variates", Journal of Statistical Computation and Simulation 46 (1993) 101-110, algorithm BTRS, recalled), which needs
 * about 1.15 pairs of uniform numbers for one draw and rarely a logarithm.
 *
 * <p>Exact but for the rounding of its arithmetic. That of the rejection grows with the trials: its probabilities have
 * relative error of about 1e-16 times the trials, which is less than 1e-6 up to 1e10 trials. Same generator, same draws, on
 * every machine.
 */
final class BinomialSampler {

    /** The rejection needs a mean of 10 at least; up to there inversion takes some ten multiplications. */
    private static final double INVERSION_BELOW = 10;

    /** Inversion starts over beyond this: a mean below 10 gets there with a probability below 1e-60. */
    private static final long INVERSION_END = 150;

    private static final double HALF_LOG_TWO_PI = 0.5 * StrictMath.log(2 * StrictMath.PI);

    /** Up to here the remainder of Stirling's series is kept; beyond, three terms of it have error below 1e-13. */
    private static final int TABLED = 64;

    private static final double[] REMAINDERS = remainders();

    private BinomialSampler() {}

    /**
     * The number of successes.
     *
     * @param random the source of chance
     * @param trials 0 or more
     * @param rate probability of a success, in [0, 1]
     */
    static long draw(RandomGenerator random, long trials, double rate) {
        if (trials < 0) {
            throw new IllegalArgumentException("trials: " + trials + " (expected: 0 or more)");
        }
        if (!(rate >= 0 && rate <= 1)) {
            throw new IllegalArgumentException("rate: " + rate + " (expected: in [0, 1])");
        }
        return rate <= 0.5 ? rarer(random, trials, rate) : trials - rarer(random, trials, 1 - rate);
    }

    private static long rarer(RandomGenerator random, long trials, double rate) {
        if (trials == 0 || rate == 0) {
            return 0;
        }
        return trials * rate < INVERSION_BELOW ? inverted(random, trials, rate) : rejected(random, trials, rate);
    }

    private static long inverted(RandomGenerator random, long trials, double rate) {
        double odds = rate / (1 - rate);
        double none = StrictMath.exp(trials * StrictMath.log1p(-rate));
        while (true) {
            double rest = random.nextDouble();
            double probability = none;
            for (long successes = 0; successes <= trials && successes < INVERSION_END; successes++) {
                if (rest < probability) {
                    return successes;
                }
                rest -= probability;
                probability *= odds * (trials - successes) / (successes + 1);
            }
        }
    }

    /** The names of the constants are those of the paper. */
    private static long rejected(RandomGenerator random, long trials, double rate) {
        double deviation = StrictMath.sqrt(trials * rate * (1 - rate));
        double b = 1.15 + 2.53 * deviation;
        double a = -0.0873 + 0.0248 * b + 0.01 * rate;
        double c = trials * rate + 0.5;
        double surelyAccepted = 0.92 - 4.2 / b;
        while (true) {
            double u = random.nextDouble() - 0.5;
            double v = random.nextDouble();
            double edge = 0.5 - StrictMath.abs(u);
            double point = StrictMath.floor((2 * a / edge + b) * u + c);
            if (edge >= 0.07 && v <= surelyAccepted) {
                return (long) point;
            }
            if (!(point >= 0 && point <= trials)) {
                continue;
            }
            double alpha = (2.83 + 5.1 / b) * deviation;
            double height = StrictMath.log(v * alpha / (a / (edge * edge) + b));
            if (height <= logRatioToMode(trials, rate, point)) {
                return (long) point;
            }
        }
    }

    /** Natural logarithm of the probability of {@code k} successes over that of the mode. */
    private static double logRatioToMode(double n, double rate, double k) {
        double odds = rate / (1 - rate);
        double mode = StrictMath.floor((n + 1) * rate);
        return (mode + 0.5) * StrictMath.log((mode + 1) / (odds * (n - mode + 1)))
                + (n + 1) * StrictMath.log((n - mode + 1) / (n - k + 1))
                + (k + 0.5) * StrictMath.log(odds * (n - k + 1) / (k + 1))
                + remainder(mode)
                + remainder(n - mode)
                - remainder(k)
                - remainder(n - k);
    }

    /**
     * {@code log(k!) - (log(2 pi)/2 + (k + 1/2) log(k + 1) - (k + 1))}: what Stirling's formula leaves over.
     *
     * @param k a whole number, 0 or more
     */
    static double remainder(double k) {
        if (k < TABLED) {
            return REMAINDERS[(int) k];
        }
        double inverse = 1 / (k + 1);
        double square = inverse * inverse;
        return inverse * (1.0 / 12 - square * (1.0 / 360 - square / 1260));
    }

    private static double[] remainders() {
        double[] remainders = new double[TABLED];
        double logFactorial = 0;
        for (int k = 0; k < TABLED; k++) {
            logFactorial += k == 0 ? 0 : StrictMath.log(k);
            remainders[k] = logFactorial - (HALF_LOG_TWO_PI + (k + 0.5) * StrictMath.log(k + 1) - (k + 1));
        }
        return remainders;
    }
}
