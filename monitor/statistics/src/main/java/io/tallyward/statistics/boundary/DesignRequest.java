package io.tallyward.statistics.boundary;

import io.tallyward.statistics.spending.SpendingFunction;
import java.util.Optional;

/**
 * What a design is to achieve.
 *
 * @param tailLevel type I error of each tail, in (0, 0.5)
 * @param twoSided whether the lower tail is tested too
 * @param spending how each tail's error is spent
 * @param power probability of crossing the upper boundary under the drift sought, in (0.5, 1) and above tailLevel
 * @param fractions planned information of each look relative to the maximum, ascending; usually ends at 1
 * @param futilitySpending how the type II error is spent; empty for a design without futility bounds
 */
public record DesignRequest(
        double tailLevel,
        boolean twoSided,
        SpendingFunction spending,
        double power,
        double[] fractions,
        Optional<SpendingFunction> futilitySpending) {

    public DesignRequest {
        if (!(tailLevel > 0 && tailLevel < 0.5)) {
            throw new IllegalArgumentException("tailLevel: " + tailLevel + " (expected: in (0, 0.5))");
        }
        if (!(power > 0.5 && power < 1)) {
            throw new IllegalArgumentException("power: " + power + " (expected: in (0.5, 1))");
        }
        fractions = fractions.clone();
        requireFractions(fractions);
    }

    private static void requireFractions(double[] fractions) {
        if (fractions.length == 0) {
            throw new IllegalArgumentException("fractions: none (expected: at least one look)");
        }
        if (!(fractions[fractions.length - 1] > 0 && fractions[fractions.length - 1] <= BoundarySequence.MOST)) {
            throw new IllegalArgumentException("fractions[" + (fractions.length - 1) + "]: "
                    + fractions[fractions.length - 1] + " (expected: above 0, at most " + BoundarySequence.MOST + ")");
        }
        for (int k = 0; k < fractions.length - 1; k++) {
            if (!(fractions[k] < 1)) {
                throw new IllegalArgumentException("fractions[" + k + "]: " + fractions[k]
                        + " (expected: below 1, as error must be left for the last look)");
            }
        }
    }

    @Override
    public double[] fractions() {
        return fractions.clone();
    }
}
