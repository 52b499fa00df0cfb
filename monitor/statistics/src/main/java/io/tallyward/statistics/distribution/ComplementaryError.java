package io.tallyward.statistics.distribution;

/**
 * The complementary error function with the factor {@code exp(-x^2)} taken out.
 *
 * <p>Rational Chebyshev approximations of W. J. Cody, "Rational Chebyshev approximations for the error function",
 * Mathematics of Computation 23 (1969) 631-637, <a href="https://doi.org/10.1090/S0025-5718-1969-0247736-4">doi</a>; his
 * coefficients for 18 significant digits. Relative error below 1e-15 over the whole range.
 */
final class ComplementaryError {

    private static final double SMALL = 0.46875;
    private static final double MIDDLE = 4.0;
    private static final double ONE_OVER_ROOT_PI = 5.6418958354775628695e-1;

    private static final double[] ERF_NUMERATOR = {
        1.85777706184603153e-1,
        3.16112374387056560e0,
        1.13864154151050156e2,
        3.77485237685302021e2,
        3.20937758913846947e3
    };
    private static final double[] ERF_DENOMINATOR = {
        1, 2.36012909523441209e1, 2.44024637934444173e2, 1.28261652607737228e3, 2.84423683343917062e3
    };
    private static final double[] MIDDLE_NUMERATOR = {
        2.15311535474403846e-8,
        5.64188496988670089e-1,
        8.88314979438837594e0,
        6.61191906371416295e1,
        2.98635138197400131e2,
        8.81952221241769090e2,
        1.71204761263407058e3,
        2.05107837782607147e3,
        1.23033935479799725e3
    };
    private static final double[] MIDDLE_DENOMINATOR = {
        1,
        1.57449261107098347e1,
        1.17693950891312499e2,
        5.37181101862009858e2,
        1.62138957456669019e3,
        3.29079923573345963e3,
        4.36261909014324716e3,
        3.43936767414372164e3,
        1.23033935480374942e3
    };
    private static final double[] FAR_NUMERATOR = {
        1.63153871373020978e-2,
        3.05326634961232344e-1,
        3.60344899949804439e-1,
        1.25781726111229246e-1,
        1.60837851487422766e-2,
        6.58749161529837803e-4
    };
    private static final double[] FAR_DENOMINATOR = {
        1,
        2.56852019228982242e0,
        1.87295284992346725e0,
        5.27905102951428412e-1,
        6.05183413124413191e-2,
        2.33520497626869185e-3
    };

    private ComplementaryError() {}

    /** {@code exp(x^2) * erfc(x)} for {@code x >= 0}. */
    static double scaled(double x) {
        if (x <= SMALL) {
            return StrictMath.exp(x * x) * (1 - x * ratio(ERF_NUMERATOR, ERF_DENOMINATOR, x * x));
        }
        if (x <= MIDDLE) {
            return ratio(MIDDLE_NUMERATOR, MIDDLE_DENOMINATOR, x);
        }
        double y = 1 / (x * x);
        return (ONE_OVER_ROOT_PI - y * ratio(FAR_NUMERATOR, FAR_DENOMINATOR, y)) / x;
    }

    private static double ratio(double[] numerator, double[] denominator, double x) {
        double above = numerator[0];
        for (int i = 1; i < numerator.length; i++) {
            above = above * x + numerator[i];
        }
        double below = denominator[0];
        for (int i = 1; i < denominator.length; i++) {
            below = below * x + denominator[i];
        }
        return above / below;
    }
}
