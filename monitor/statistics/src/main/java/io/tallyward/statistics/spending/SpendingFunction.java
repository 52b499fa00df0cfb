package io.tallyward.statistics.spending;

/**
 * Cumulative error that may be spent by a fraction of the planned information. Implementations are values: equal if of
 * one family with one parameter, immutable, and free of state.
 *
 * <p>Relative error below 1e-14, but for the O'Brien-Fleming type far out in the tail: 1e-16 in the quantile of the level is
 * 1e-13 in a tail thirty standard deviations away (measured over the reference designs: 2e-13).
 */
public sealed interface SpendingFunction permits SpendingFamily {

    /**
     * The cumulative error spent: 0 at fraction 0, exactly {@code level} from fraction 1 on, never falling between.
     *
     * @param level the level of one tail, in (0, 1)
     * @param fraction information over planned information, or another clock's time over its planned end; 0 or more, may be
     *     infinite
     * @throws IllegalArgumentException if the level or the fraction is out of range
     */
    double spent(double level, double fraction);

    /**
     * Spends almost nothing early: boundaries that fall like one over the root of the fraction. {@code 2 (1 - Phi(z / sqrt
     * t))}, {@code z} being the upper {@code level/2} quantile (Lan and DeMets 1983).
     */
    static SpendingFunction obrienFlemingType() {
        return new SpendingFamily.ObrienFlemingType();
    }

    /** Spends early: boundaries that stay nearly level. {@code level ln(1 + (e - 1) t)} (Lan and DeMets 1983). */
    static SpendingFunction pocockType() {
        return new SpendingFamily.PocockType();
    }

    /**
     * An exponential family between and beyond the two classical shapes: {@code level (1 - exp(-gamma t)) / (1 -
     * exp(-gamma))} (Hwang, Shih and DeCani 1990). With gamma -4 close to the O'Brien-Fleming type, with 1 to the Pocock type.
     *
     * @param gamma negative spends late, 0 evenly, positive early; in [-40, 40]
     */
    static SpendingFunction hwangShihDecani(double gamma) {
        return new SpendingFamily.HwangShihDecani(gamma);
    }

    /**
     * A power of the fraction: {@code level t^rho} (Kim and DeMets 1987). With rho 3 close to the O'Brien-Fleming type.
     *
     * @param rho the power, in (0, 100]; 1 spends evenly, more spends late
     */
    static SpendingFunction kimDemets(double rho) {
        return new SpendingFamily.KimDemets(rho);
    }

    /**
     * Cumulative spending given point by point, linear in between and from nothing at fraction 0 to the first point.
     *
     * @param fractions in (0, 1], strictly ascending, the last exactly 1
     * @param shares share of the level that may be spent by each fraction, in [0, 1], never falling, the last exactly 1
     * @throws IllegalArgumentException if a point is out of range or out of order
     */
    static SpendingFunction table(double[] fractions, double[] shares) {
        return SpendingTable.of(fractions, shares);
    }

    /**
     * This function, kept silent before a fraction: nothing is spent before it, and from it on as much in total as this
     * function allows. The first look from the start on may so spend all that was saved; the level is the same.
     *
     * <p>A look that spends nothing has no boundary and takes nothing from later ones. The function of one tail may be
     * delayed without the other's.
     *
     * @param fraction first fraction at which something may be spent, in [0, 1]; 1 saves the whole level for the end
     * @throws IllegalArgumentException if the fraction is out of range
     */
    default SpendingFunction startingAt(double fraction) {
        if (!(fraction >= 0 && fraction <= 1)) {
            throw new IllegalArgumentException("fraction: " + fraction + " (expected: in [0, 1])");
        }
        return fraction == 0 ? this : new DelayedSpending(this, fraction);
    }
}
