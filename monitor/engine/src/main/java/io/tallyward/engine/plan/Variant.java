package io.tallyward.engine.plan;

/**
 * One of the things shown at random.
 *
 * @param name name of the variant, unique in its plan
 * @param share planned share of the units, in (0, 1); the shares of a plan add up to 1
 * @param control whether the others are compared with this one
 */
public record Variant(String name, double share, boolean control) {

    public Variant {
        if (!(share > 0 && share < 1)) {
            throw new IllegalArgumentException("share: " + share + " (expected: between 0 and 1, both excluded)");
        }
    }
}
