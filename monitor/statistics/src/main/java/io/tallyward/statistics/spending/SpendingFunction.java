package io.tallyward.statistics.spending;

/**
 * Cumulative error that may be spent by a fraction of the planned information. Implementations are values: equal if of
 * one family with one parameter, immutable, and free of state.
 */
public sealed interface SpendingFunction permits SpendingFamily {

    /**
     * The cumulative error spent: 0 at fraction 0, exactly {@code level} from fraction 1 on, never falling between.
     *
     * @param level the level of one tail, in (0, 1)
     * @param fraction information over planned information, 0 or more
     */
    double spent(double level, double fraction);

    /** Spends almost nothing early: boundaries that fall like one over the root of the fraction. */
    static SpendingFunction obrienFlemingType() {
        return new SpendingFamily.ObrienFlemingType();
    }

    /** Spends early: boundaries that stay nearly level. */
    static SpendingFunction pocockType() {
        return new SpendingFamily.PocockType();
    }

    /**
     * An exponential family between and beyond the two classical shapes.
     *
     * @param gamma negative spends late, 0 evenly, positive early; in [-40, 40]
     */
    static SpendingFunction hwangShihDecani(double gamma) {
        return new SpendingFamily.HwangShihDecani(gamma);
    }

    /**
     * A power of the fraction.
     *
     * @param rho the power, in (0, 100]; 1 spends evenly, more spends late
     */
    static SpendingFunction kimDemets(double rho) {
        return new SpendingFamily.KimDemets(rho);
    }
}
