package io.tallyward.statistics.boundary;

/**
 * One look of a sequence.
 *
 * @param number 1 for the first look
 * @param information information relative to the planned maximum; positive, may exceed 1
 * @param upperSpent error spent in the upper tail up to and including this look
 * @param lowerSpent error spent in the lower tail up to and including this look
 * @param upper boundary of the upper tail for z (reached from it upwards); positive infinity if nothing was spent here
 * @param lower boundary of the lower tail for z (reached from it downwards); negative infinity if nothing was spent here
 */
public record Look(int number, double information, double upperSpent, double lowerSpent, double upper, double lower) {

    public Look {
        if (number < 1) {
            throw new IllegalArgumentException("number: " + number + " (expected: 1 or more)");
        }
        if (!(information > 0 && information < Double.POSITIVE_INFINITY)) {
            throw new IllegalArgumentException("information: " + information + " (expected: positive and finite)");
        }
        if (!(upperSpent >= 0 && lowerSpent >= 0 && upperSpent + lowerSpent < 1)) {
            throw new IllegalArgumentException("upperSpent, lowerSpent: " + upperSpent + ", " + lowerSpent
                    + " (expected: 0 or more each, below 1 together)");
        }
        if (!(lower <= upper)) {
            throw new IllegalArgumentException(
                    "lower: " + lower + " (expected: at most the upper boundary " + upper + ")");
        }
    }
}
