package io.tallyward.statistics.spending;

/**
 * Another function that is kept silent at first: 0 before the start, the other function's value from the start on. What
 * the other would have spent before is not lost; the first look from the start on may spend it all.
 *
 * @param base the function once it may spend
 * @param start first fraction at which something may be spent, in (0, 1]
 */
record DelayedSpending(SpendingFunction base, double start) implements SpendingFamily {

    @Override
    public double between(double level, double fraction) {
        return fraction < start ? 0 : base.spent(level, fraction);
    }
}
