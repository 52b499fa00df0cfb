package io.tallyward.statistics.boundary;

/**
 * The normal kernel between the points of two composite rules, without an exponential function for each pair of points.
 *
 * <p>Points are {@code a + h p} and {@code b + g q} with middles {@code a, b} and half widths {@code h, g} of their panels and
 * abscissae {@code p, q} in [-1, 1]. With {@code D = a - b},
 *
 * <pre>exp(-(D + h p - g q)^2 / 2d) = exp(-D^2 / 2d) exp(-D h p / d) exp(D g q / d) exp(-(h p - g q)^2 / 2d)</pre>
 *
 * <p>The last factor is a table of 144 numbers for all panels; the two before it change from panel to panel by factors
 * that are the same all along. One call of the exponential function for a pair of panels remains. No factor exceeds what
 * the next one takes back by more than {@code e^2}, as panels are no wider than two standard deviations. The factors are
 * exact at the panel opposite the target and lose half a digit on the way to where the kernel vanishes. Sums agree with
 * plain ones to 2e-14 of themselves far out in the kernel and better near its centre.
 */
final class PanelKernel {

    private static final int POINTS = Quadrature.POINTS;

    private static final int PAIRS = POINTS / 2;

    /** Rounding grows along a walk, so it starts afresh every so many panels. */
    private static final int FRESH = 16;

    private final Quadrature source;
    private final double[] masses;
    private final double variance;
    private final double targetHalf;

    /** The kernel within a pair of panels on top of each other, for sums and for differences of mirrored points. */
    private final double[] even = new double[PAIRS * PAIRS];

    private final double[] odd = new double[PAIRS * PAIRS];

    /** By how much the factor of a target or source point grows when D shrinks or grows by a panel. */
    private final double[] targetGrowth;

    private final double[] sourceGrowth;

    private final double[] targetStart = new double[POINTS];
    private final double[] sourceStart = new double[POINTS];
    private final double[] targetFactors = new double[POINTS];
    private final double[] sourceFactors = new double[POINTS];
    private final double[] together = new double[PAIRS];
    private final double[] apart = new double[PAIRS];

    /**
     * @param source where the masses are; panels no wider than two standard deviations
     * @param masses one per point of {@code source}
     * @param targetHalf half width of the panels they are smeared onto; at most a standard deviation
     * @param variance of the kernel
     */
    PanelKernel(Quadrature source, double[] masses, double targetHalf, double variance) {
        this.source = source;
        this.masses = masses;
        this.variance = variance;
        this.targetHalf = targetHalf;
        for (int i = 0; i < PAIRS; i++) {
            for (int j = 0; j < PAIRS; j++) {
                double near = within(Quadrature.abscissa(i), Quadrature.abscissa(j));
                double mirrored = within(Quadrature.abscissa(i), -Quadrature.abscissa(j));
                even[i * PAIRS + j] = 0.5 * (near + mirrored);
                odd[i * PAIRS + j] = 0.5 * (near - mirrored);
            }
        }
        targetGrowth = exponentials(2 * source.half() * targetHalf / variance);
        sourceGrowth = exponentials(2 * source.half() * source.half() / variance);
    }

    /**
     * Sums the kernel over the masses, without its constant factor.
     *
     * @param centre middle of the target panel
     * @param band how far from a target point masses still count
     * @param sums gets a sum per target point of the panel, which begins at {@code at}
     */
    void smear(double centre, double band, double[] sums, int at) {
        double reach = band + targetHalf + source.half();
        double width = 2 * source.half();
        double opposite = StrictMath.floor((centre - source.from()) / width);
        int start = (int) StrictMath.max(0, StrictMath.min(source.panels() - 1, opposite));
        for (int i = 0; i < POINTS; i++) {
            sums[at + i] = 0;
        }
        fill(targetStart, -(centre - source.middle(start)) * targetHalf / variance);
        fill(sourceStart, (centre - source.middle(start)) * source.half() / variance);
        walk(centre, reach, start, 1, sums, at);
        walk(centre, reach, start, -1, sums, at);
    }

    /** Adds what comes from the panels on one side of the start; the start itself belongs to the side above. */
    private void walk(double centre, double reach, int start, int direction, double[] sums, int at) {
        System.arraycopy(targetStart, 0, targetFactors, 0, POINTS);
        System.arraycopy(sourceStart, 0, sourceFactors, 0, POINTS);
        for (int panel = start; panel >= 0 && panel < source.panels(); panel += direction) {
            double distance = centre - source.middle(panel);
            if (direction * distance < -reach) {
                return;
            }
            if (panel != start) {
                proceed(distance, direction, StrictMath.abs(panel - start) % FRESH == 0);
            }
            if (StrictMath.abs(distance) <= reach && !(panel == start && direction < 0)) {
                // Half of the exponent on either side: the whole would underflow before the product does.
                add(panel, StrictMath.exp(-0.25 * distance * distance / variance), sums, at);
            }
        }
    }

    private void proceed(double distance, int direction, boolean fresh) {
        if (fresh) {
            fill(targetFactors, -distance * targetHalf / variance);
            fill(sourceFactors, distance * source.half() / variance);
        } else {
            move(targetFactors, targetGrowth, direction);
            move(sourceFactors, sourceGrowth, -direction);
        }
    }

    private double within(double targetAbscissa, double sourceAbscissa) {
        double gap = targetHalf * targetAbscissa - source.half() * sourceAbscissa;
        return StrictMath.exp(-0.5 * gap * gap / variance);
    }

    /** The table is the same after mirroring both points, so that half of the products do. */
    private void add(int panel, double factor, double[] sums, int at) {
        int first = panel * POINTS;
        for (int j = 0; j < PAIRS; j++) {
            int mirrored = POINTS - 1 - j;
            double left = masses[first + j] * (sourceFactors[j] * factor);
            double right = masses[first + mirrored] * (sourceFactors[mirrored] * factor);
            together[j] = left + right;
            apart[j] = left - right;
        }
        for (int i = 0; i < PAIRS; i++) {
            double same = 0;
            double opposite = 0;
            for (int j = 0; j < PAIRS; j++) {
                same += even[i * PAIRS + j] * together[j];
                opposite += odd[i * PAIRS + j] * apart[j];
            }
            int mirrored = POINTS - 1 - i;
            sums[at + i] += (same + opposite) * (targetFactors[i] * factor);
            sums[at + mirrored] += (same - opposite) * (targetFactors[mirrored] * factor);
        }
    }

    private static double[] exponentials(double rate) {
        double[] values = new double[POINTS];
        fill(values, rate);
        return values;
    }

    /** Sets each value to {@code exp(rate * abscissa)}; abscissae are symmetric. */
    private static void fill(double[] values, double rate) {
        for (int i = 0; i < PAIRS; i++) {
            double value = StrictMath.exp(rate * Quadrature.abscissa(i));
            values[i] = value;
            values[POINTS - 1 - i] = 1 / value;
        }
    }

    /** Multiplies by the growth of a panel, or divides by it, which is to multiply by that of the mirrored point. */
    private static void move(double[] factors, double[] growth, int direction) {
        for (int i = 0; i < POINTS; i++) {
            factors[i] *= growth[direction > 0 ? i : POINTS - 1 - i];
        }
    }
}
