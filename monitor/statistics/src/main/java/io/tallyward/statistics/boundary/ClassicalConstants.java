package io.tallyward.statistics.boundary;

import io.tallyward.statistics.distribution.Normal;
import java.util.ArrayList;
import java.util.List;
import org.apache.commons.math3.analysis.UnivariateFunction;
import org.apache.commons.math3.analysis.solvers.BrentSolver;

/**
 * The classical two-sided tests with K equally spaced looks, planned before there were spending functions. Each is a
 * shape times one constant that gives the whole its level; {@code abs(Z_k)} at or above the boundary of look k rejects.
 *
 * <p>Constants are accurate to 1e-10. A constant takes some milliseconds for ten looks and some hundreds for
 * {@link #MOST_LOOKS}.
 */
public enum ClassicalConstants {

    /**
     * The same boundary at every look, {@code C_P(K, alpha)}: Pocock, "Group sequential methods in the design and analysis
     * of clinical trials", Biometrika 64 (1977) 191-199, recalled. Stops early most easily; the last boundary is far above that of
     * a single test.
     */
    POCOCK {
        @Override
        double shape(double fraction) {
            return 1;
        }
    },

    /**
     * {@code C_B(K, alpha) sqrt(K / k)} at look k: O'Brien and Fleming, "A multiple testing procedure for clinical trials",
     * Biometrics 35 (1979) 549-556, recalled. Hardly ever stops at the first looks; the last boundary is close to that of a single
     * test.
     */
    OBRIEN_FLEMING {
        @Override
        double shape(double fraction) {
            return 1 / StrictMath.sqrt(fraction);
        }
    };

    /** More looks than this are refused: they would take long, and a spending function serves them better. */
    public static final int MOST_LOOKS = 200;

    /** The least level, far below any in use. */
    public static final double LEAST_LEVEL = 1e-12;

    private static final double GREATEST_LEVEL = 0.5;

    /** Widens the bracket of the constant: with a very small level it lies at the very end of it. */
    private static final double MARGIN = 1e-6;

    /** Absolute accuracy of the constant as solved. */
    private static final double ACCURACY = 1e-12;

    private static final int MOST_EVALUATIONS = 100;

    /** The boundary at an information fraction, relative to the constant. */
    abstract double shape(double fraction);

    /**
     * The constant.
     *
     * @param looks number of looks K, in [1, {@link #MOST_LOOKS}]
     * @param alpha level of both tails together, in [{@link #LEAST_LEVEL}, 0.5]
     */
    public double constant(int looks, double alpha) {
        if (!(looks >= 1 && looks <= MOST_LOOKS)) {
            throw new IllegalArgumentException("looks: " + looks + " (expected: in [1, " + MOST_LOOKS + "])");
        }
        if (!(alpha >= LEAST_LEVEL && alpha <= GREATEST_LEVEL)) {
            throw new IllegalArgumentException(
                    "alpha: " + alpha + " (expected: in [" + LEAST_LEVEL + ", " + GREATEST_LEVEL + "])");
        }
        double tail = alpha / 2;
        double single = Normal.upperQuantile(tail);
        if (looks == 1) {
            return single;
        }
        double[] fractions = equalFractions(looks);
        // As a function of the constant, the quantile of the crossing probability is nearly a straight line.
        UnivariateFunction excess = c ->
                Normal.upperQuantile(exits(fractions, boundaries(fractions, c)).totalUpper()) - single;
        // One look of K has at most the error of all (Bonferroni), and no look is nearer than the constant.
        double farthest = Normal.upperQuantile(tail / looks);
        return new BrentSolver(0, ACCURACY, 0).solve(MOST_EVALUATIONS, excess, single - MARGIN, farthest + MARGIN);
    }

    /** The upper boundary of each look for z; the lower ones are the same with the sign reversed. Ranges as above. */
    public double[] boundaries(int looks, double alpha) {
        double constant = constant(looks, alpha);
        return boundaries(equalFractions(looks), constant);
    }

    /** The looks, with the error that these boundaries spend in each tail, accurate to 1e-12. Ranges as above. */
    public List<Look> looks(int looks, double alpha) {
        double[] upper = boundaries(looks, alpha);
        double[] fractions = equalFractions(looks);
        double[] exits = exits(fractions, upper).upper();
        List<Look> taken = new ArrayList<>();
        double spent = 0;
        for (int k = 0; k < looks; k++) {
            spent += exits[k];
            taken.add(new Look(k + 1, fractions[k], spent, spent, upper[k], -upper[k]));
        }
        return taken;
    }

    /**
     * The drift these boundaries find with a power. Ranges as above.
     *
     * @param power probability of crossing an upper boundary before any lower one, in (alpha / 2, 1)
     * @return expected z at the last look
     */
    public double drift(int looks, double alpha, double power) {
        double[] upper = boundaries(looks, alpha);
        if (!(power > alpha / 2 && power < 1)) {
            throw new IllegalArgumentException("power: " + power + " (expected: in (" + alpha / 2 + ", 1))");
        }
        return DriftForPower.of(equalFractions(looks), upper, negated(upper), power);
    }

    private double[] boundaries(double[] fractions, double constant) {
        double[] boundaries = new double[fractions.length];
        for (int k = 0; k < boundaries.length; k++) {
            boundaries[k] = constant * shape(fractions[k]);
        }
        return boundaries;
    }

    private static ExitProbabilities exits(double[] fractions, double[] upper) {
        return ExitProbabilities.of(fractions, upper, negated(upper), 0);
    }

    private static double[] equalFractions(int looks) {
        double[] fractions = new double[looks];
        for (int k = 0; k < looks; k++) {
            fractions[k] = (k + 1.0) / looks;
        }
        return fractions;
    }

    private static double[] negated(double[] values) {
        double[] negated = new double[values.length];
        for (int k = 0; k < values.length; k++) {
            negated[k] = -values[k];
        }
        return negated;
    }
}
