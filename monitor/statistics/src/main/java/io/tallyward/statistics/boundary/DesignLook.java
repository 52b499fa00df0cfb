package io.tallyward.statistics.boundary;

/**
 * One planned look.
 *
 * @param boundaries its information, its spending and its efficacy boundaries
 * @param futility z below which the look speaks of futility; negative infinity if it has no such bound
 */
public record DesignLook(Look boundaries, double futility) {

    public DesignLook {
        if (!(futility <= boundaries.upper())) {
            throw new IllegalArgumentException(
                    "futility: " + futility + " (expected: at most the upper boundary " + boundaries.upper() + ")");
        }
    }
}
