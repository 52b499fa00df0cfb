package io.tallyward.engine.plan;

/**
 * How one direction is tested.
 *
 * @param alpha family-wise level of this direction over all challengers and looks, in (0, 0.5)
 * @param spending how it is spent over the looks
 * @param silentBefore fraction of the spending clock before which nothing is spent, in [0, 1]; what would have been spent by
 *     then may be spent from there on
 */
public record Tail(double alpha, Spending spending, double silentBefore) {

    public Tail {
        if (!(alpha > 0 && alpha < 0.5)) {
            throw new IllegalArgumentException("alpha: " + alpha + " (expected: between 0 and 0.5, both excluded)");
        }
        if (!(silentBefore >= 0 && silentBefore <= 1)) {
            throw new IllegalArgumentException("silentBefore: " + silentBefore + " (expected: in [0, 1])");
        }
    }

    /** A tail that may spend from the first look on. */
    public static Tail of(double alpha, Spending spending) {
        return new Tail(alpha, spending, 0);
    }
}
