package io.tallyward.statistics.spending;

import java.util.ArrayList;
import java.util.List;

/**
 * Spending given point by point, linear in between: with the points {@code (f_i, s_i)} around the fraction,
 * {@code level (s_i + (s_{i+1} - s_i) (f - f_i) / (f_{i+1} - f_i))}. Any function that never falls is a spending function
 * (Lan and DeMets 1983), so the shape is the owner's choice.
 *
 * @param fractions strictly ascending, the first 0 and the last 1
 * @param shares share of the level spent by each fraction, never falling, the first 0 and the last 1
 */
record SpendingTable(List<Double> fractions, List<Double> shares) implements SpendingFamily {

    SpendingTable {
        fractions = List.copyOf(fractions);
        shares = List.copyOf(shares);
    }

    static SpendingTable of(double[] fractions, double[] shares) {
        int points = fractions.length;
        if (points == 0 || shares.length != points) {
            throw new IllegalArgumentException("fractions, shares: " + points + ", " + shares.length
                    + " entries (expected: as many of each, at least one)");
        }
        List<Double> x = new ArrayList<>(List.of(0.0));
        List<Double> y = new ArrayList<>(List.of(0.0));
        for (int i = 0; i < points; i++) {
            requireNext(i, fractions[i], x.get(i), shares[i], y.get(i));
            x.add(fractions[i]);
            y.add(shares[i]);
        }
        if (x.get(points) != 1 || y.get(points) != 1) {
            throw new IllegalArgumentException("fractions, shares: end at " + x.get(points) + ", " + y.get(points)
                    + " (expected: 1, 1, so that the whole level is spent in the end)");
        }
        return new SpendingTable(x, y);
    }

    private static void requireNext(int i, double fraction, double lastFraction, double share, double lastShare) {
        if (!(fraction > lastFraction && fraction <= 1)) {
            throw new IllegalArgumentException(
                    "fractions[" + i + "]: " + fraction + " (expected: above " + lastFraction + " and at most 1)");
        }
        if (!(share >= lastShare && share <= 1)) {
            throw new IllegalArgumentException(
                    "shares[" + i + "]: " + share + " (expected: in [" + lastShare + ", 1])");
        }
    }

    @Override
    public double between(double level, double fraction) {
        int i = 1;
        while (fractions.get(i) < fraction) {
            i++;
        }
        double from = shares.get(i - 1);
        double to = shares.get(i);
        double part = (fraction - fractions.get(i - 1)) / (fractions.get(i) - fractions.get(i - 1));
        return level * StrictMath.min(to, from + (to - from) * part);
    }
}
