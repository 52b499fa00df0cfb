package io.tallyward.statistics.multiplicity;

import io.tallyward.statistics.distribution.Normal;
import java.util.function.DoubleUnaryOperator;
import org.apache.commons.math3.analysis.integration.gauss.GaussIntegrator;
import org.apache.commons.math3.analysis.integration.gauss.GaussIntegratorFactory;

/**
 * Several variants against one control at a single look, variances known: the largest of correlated normal statistics.
 * Dunnett, "A multiple comparison procedure for comparing several treatments with a control", JASA 50 (1955) 1096-1121, for
 * infinite degrees of freedom, and "New tables for multiple comparisons with a control", Biometrics 20 (1964) 482-491, for
 * unequal allocation.
 *
 * <p>With {@code n0} trials of the control and {@code ni} of variant i, the statistics correlate by {@code li lj}, {@code li
 * = 1 / sqrt(1 + n0 / ni)}. Given the control's part {@code u}, standard normal, they are independent with mean {@code li u}
 * and variance {@code si^2 = 1 - li^2}, so
 *
 * <pre>P(some Zi &gt; c) = integral phi(u) [1 - product (1 - qi(u))] du,    qi(u) = P(li u + si e &gt; c)</pre>
 *
 * <p>computed from the tails {@code qi}, so that small probabilities keep their digits: relative error below 1e-12 for
 * probabilities above 1e-200; critical values have absolute error below 1e-12. Thread-safe; a critical value costs some
 * milliseconds.
 */
public final class Dunnett {

    private static final int MOST_VARIANTS = 100;

    /** Beyond this, a comparison is one with a constant, and the kink it leaves in the integrand too sharp to follow. */
    private static final double MOST_UNEQUAL = 1e6;

    /** No tail is left beyond this in double precision. */
    private static final double FARTHEST = 40;

    private static final double LEAST_ALPHA = 1e-200;
    private static final double MOST_ALPHA = 0.5;

    /** How far beyond the critical value the control's part is followed: 1e-23 of the mass is cut off. */
    private static final double MARGIN = 10;

    /** Sixteen points for a standard deviation at most: below 1e-15 for a normal density. */
    private static final GaussIntegrator RULE = new GaussIntegratorFactory().legendre(16);

    /** Panels grow by this share of their distance from the next place where the integrand bends. */
    private static final double GROWTH = 0.25;

    private static final double CLOSE = 1e-14;
    private static final int MOST_STEPS = 100;

    private final double[] loading;
    private final double[] residual;

    private Dunnett(double[] loading, double[] residual) {
        this.loading = loading;
        this.residual = residual;
    }

    /**
     * The comparisons of a design.
     *
     * @param control trials, or share, of the control; positive
     * @param variants likewise of each variant, in the same unit; from 1 to 100 of them, each within a factor of a million
     *     of the control
     */
    public static Dunnett of(double control, double... variants) {
        if (variants.length < 1 || variants.length > MOST_VARIANTS) {
            throw new IllegalArgumentException(
                    "variants: " + variants.length + " entries (expected: from 1 to " + MOST_VARIANTS + ")");
        }
        if (!(control > 0 && control < Double.POSITIVE_INFINITY)) {
            throw new IllegalArgumentException("control: " + control + " (expected: positive and finite)");
        }
        double[] loading = new double[variants.length];
        double[] residual = new double[variants.length];
        for (int i = 0; i < variants.length; i++) {
            double ratio = variants[i] / control;
            if (!(ratio >= 1 / MOST_UNEQUAL && ratio <= MOST_UNEQUAL)) {
                throw new IllegalArgumentException("variants[" + i + "]: " + variants[i]
                        + " (expected: within a factor of 1e6 of the control's " + control + ")");
            }
            loading[i] = StrictMath.sqrt(ratio / (1 + ratio));
            residual[i] = StrictMath.sqrt(1 / (1 + ratio));
        }
        return new Dunnett(loading, residual);
    }

    /**
     * The value that some {@code Zi} exceeds with probability {@code alpha}.
     *
     * @param alpha family-wise one-sided level, in [1e-200, 0.5]
     */
    public double oneSidedCriticalValue(double alpha) {
        requireAlpha(alpha);
        return solve(
                this::oneSidedTail, alpha, Normal.upperQuantile(alpha), Normal.upperQuantile(alpha / loading.length));
    }

    /**
     * The value that some {@code |Zi|} exceeds with probability {@code alpha}.
     *
     * @param alpha family-wise two-sided level, in [1e-200, 0.5]
     */
    public double twoSidedCriticalValue(double alpha) {
        requireAlpha(alpha);
        return solve(
                this::twoSidedTail,
                alpha,
                Normal.upperQuantile(alpha / 2),
                Normal.upperQuantile(alpha / 2 / loading.length));
    }

    /**
     * The probability that some {@code Zi} exceeds {@code c} without any effect: the adjusted one-sided p-value of a
     * statistic {@code c}.
     *
     * @param c finite
     */
    public double oneSidedTail(double c) {
        if (!(StrictMath.abs(c) < Double.POSITIVE_INFINITY)) {
            throw new IllegalArgumentException("c: " + c + " (expected: finite)");
        }
        if (StrictMath.abs(c) > FARTHEST) {
            return c > 0 ? 0 : 1;
        }
        return integral(c, false);
    }

    /**
     * The probability that some {@code |Zi|} exceeds {@code c} without any effect: the adjusted two-sided p-value of a
     * statistic {@code c} or {@code -c}.
     *
     * @param c 0 or more, finite
     */
    public double twoSidedTail(double c) {
        if (!(c >= 0 && c < Double.POSITIVE_INFINITY)) {
            throw new IllegalArgumentException("c: " + c + " (expected: 0 or more, finite)");
        }
        return c > FARTHEST ? 0 : integral(c, true);
    }

    private double integral(double c, boolean bothSides) {
        double reach = StrictMath.abs(c) + MARGIN;
        double sum = 0;
        double from = -reach;
        while (from < reach) {
            double to = StrictMath.min(reach, from + panelWidth(from, c));
            double half = 0.5 * (to - from);
            double middle = from + half;
            for (int i = 0; i < RULE.getNumberOfPoints(); i++) {
                double u = middle + half * RULE.getPoint(i);
                sum += half * RULE.getWeight(i) * Normal.density(u) * someExceed(u, c, bothSides);
            }
            from = to;
        }
        return StrictMath.min(1, sum);
    }

    /** The integrand bends around {@code u = li c} and {@code -li c}, on the scale of {@code si}. */
    private double panelWidth(double u, double c) {
        double width = 1;
        for (int i = 0; i < loading.length; i++) {
            double bend = loading[i] * StrictMath.abs(c);
            double distance = StrictMath.min(StrictMath.abs(u - bend), StrictMath.abs(u + bend));
            width = StrictMath.min(width, StrictMath.max(residual[i], GROWTH * distance));
        }
        return width;
    }

    private double someExceed(double u, double c, boolean bothSides) {
        double logNone = 0;
        for (int i = 0; i < loading.length; i++) {
            double mean = loading[i] * u;
            double tail = Normal.survival((c - mean) / residual[i]);
            if (bothSides) {
                tail += Normal.survival((c + mean) / residual[i]);
            }
            logNone += StrictMath.log1p(-StrictMath.min(1, tail));
        }
        return -StrictMath.expm1(logNone);
    }

    /**
     * Solves {@code tail(c) = alpha} between a single comparison's critical value and Bonferroni's, by the Illinois variant
     * of false position on the logarithm, which is nearly straight there.
     */
    private static double solve(DoubleUnaryOperator tail, double alpha, double from, double to) {
        double logAlpha = StrictMath.log(alpha);
        double low = from;
        double high = to;
        double atLow = StrictMath.log(tail.applyAsDouble(low)) - logAlpha;
        double atHigh = StrictMath.log(tail.applyAsDouble(high)) - logAlpha;
        if (!(atLow > 0)) {
            return low;
        }
        if (!(atHigh < 0)) {
            return high;
        }
        double last = low;
        boolean lastWasLow = false;
        for (int i = 0; i < MOST_STEPS; i++) {
            double c = high - atHigh * (high - low) / (atHigh - atLow);
            double at = StrictMath.log(tail.applyAsDouble(c)) - logAlpha;
            if (at == 0 || StrictMath.abs(c - last) <= CLOSE * (1 + StrictMath.abs(c))) {
                return c;
            }
            boolean repeated = i > 0 && lastWasLow == at > 0;
            if (at > 0) {
                low = c;
                atLow = at;
                atHigh *= repeated ? 0.5 : 1;
            } else {
                high = c;
                atHigh = at;
                atLow *= repeated ? 0.5 : 1;
            }
            lastWasLow = at > 0;
            last = c;
        }
        return last;
    }

    private static void requireAlpha(double alpha) {
        if (!(alpha >= LEAST_ALPHA && alpha <= MOST_ALPHA)) {
            throw new IllegalArgumentException("alpha: " + alpha + " (expected: in [1e-200, 0.5])");
        }
    }
}
