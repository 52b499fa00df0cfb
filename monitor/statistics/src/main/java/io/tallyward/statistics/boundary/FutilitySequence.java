package io.tallyward.statistics.boundary;

/**
 * Futility bounds for looks as they happen: below the bound, an effect of the size worth finding has become implausible.
 * Under that effect's drift, the probability of falling below a bound before any efficacy boundary is reached is exactly
 * the type II error spent so far.
 *
 * <p>The bounds are not binding: efficacy boundaries are computed without them and keep their level if the owner carries
 * on. A lower efficacy boundary (harm) plays no part here; under a drift worth finding it is practically never reached
 * first.
 *
 * <p>Mutable, not thread-safe.
 */
public final class FutilitySequence {

    /** Boundaries farther out than this are a mistake in units, and would need more nodes than there is room for. */
    private static final double FARTHEST = 1000;

    private final double drift;
    private final ContinuationDensity density;
    private double spent;
    private double found;

    /** @param drift expected z at information 1 if the effect is the one worth finding; positive */
    public FutilitySequence(double drift) {
        if (!(drift > 0 && drift < Double.POSITIVE_INFINITY)) {
            throw new IllegalArgumentException("drift: " + drift + " (expected: positive and finite)");
        }
        this.drift = drift;
        this.density = new ContinuationDensity(drift);
    }

    /** Number of looks taken. */
    public int looks() {
        return density.looks();
    }

    /** The drift under which the type II error is spent. */
    public double drift() {
        return drift;
    }

    /**
     * The probability, under the drift, that an efficacy boundary has been reached by now and no futility bound before:
     * after the last look, the power with futility obeyed.
     */
    public double power() {
        return found;
    }

    /**
     * Takes the next look and gives its futility bound.
     *
     * @param information information relative to the planned maximum, beyond the last look's
     * @param upperBoundary efficacy boundary of this look for z; positive infinity if it has none
     * @param cumulativeBetaSpent type II error that may be spent up to this look, in [0, 1), never falling
     * @return the z below which the look speaks of futility; negative infinity if nothing is spent; never above
     *     {@code upperBoundary}, even if that leaves some error unspent
     */
    public double next(double information, double upperBoundary, double cumulativeBetaSpent) {
        prepare(information, upperBoundary, cumulativeBetaSpent);
        double share = cumulativeBetaSpent - spent;
        double bound = Double.NEGATIVE_INFINITY;
        if (share > 0) {
            boolean clipped = density.below(information, upperBoundary) <= share;
            bound = clipped ? upperBoundary : StrictMath.min(upperBoundary, density.lowerBoundary(information, share));
        }
        accept(information, upperBoundary, cumulativeBetaSpent, bound);
        return bound;
    }

    /** Takes a look whose futility bound is known, without solving for it. */
    public void resume(double information, double upperBoundary, double cumulativeBetaSpent, double bound) {
        prepare(information, upperBoundary, cumulativeBetaSpent);
        if (!(bound <= upperBoundary)) {
            throw new IllegalArgumentException(
                    "bound: " + bound + " (expected: at most the efficacy boundary " + upperBoundary + ")");
        }
        accept(information, upperBoundary, cumulativeBetaSpent, bound);
    }

    private void prepare(double information, double upperBoundary, double cumulativeBetaSpent) {
        BoundarySequence.requireGrowth("information", information, density.information());
        if (!(StrictMath.abs(upperBoundary) <= FARTHEST || Double.isInfinite(upperBoundary))) {
            throw new IllegalArgumentException(
                    "upperBoundary: " + upperBoundary + " (expected: within " + FARTHEST + " of 0, or an infinity)");
        }
        if (!(cumulativeBetaSpent >= spent && cumulativeBetaSpent < 1)) {
            throw new IllegalArgumentException(
                    "cumulativeBetaSpent: " + cumulativeBetaSpent + " (expected: in [" + spent + ", 1))");
        }
        density.approach(information, ContinuationDensity.TRUNCATION, ContinuationDensity.TRUNCATION);
    }

    private void accept(double information, double upperBoundary, double cumulativeBetaSpent, double bound) {
        spent = cumulativeBetaSpent;
        found += density.above(information, upperBoundary);
        density.stop(information, bound, upperBoundary);
    }
}
