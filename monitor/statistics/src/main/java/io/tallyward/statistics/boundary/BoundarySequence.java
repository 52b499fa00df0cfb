package io.tallyward.statistics.boundary;

import io.tallyward.statistics.distribution.Normal;
import java.util.List;

/**
 * Boundaries for looks as they happen: each look names the information that is in and the error that may be spent by
 * then, and gets the boundaries that spend exactly that (Lan and DeMets 1983). A path counts as stopped when it crosses
 * either boundary of an earlier look.
 *
 * <p>Tails are independent: one may spend nothing until later, or never. As long as both have spent the same at every
 * look, {@code lower == -upper} exactly.
 *
 * <p>Mutable, not thread-safe. A look costs some ten microseconds among a few and a tenth of a millisecond among
 * a thousand; cost grows with the inverse of the smallest relative step of information.
 */
public final class BoundarySequence {

    /**
     * The least growth of information from look to look, relative to the later one. Smaller steps would need more nodes
     * than they are worth: such a look should be delayed.
     */
    public static final double LEAST_GROWTH = 1e-6;

    /** A smaller share of error than this, far below anything that can happen, gets no boundary. */
    private static final double LEAST_SHARE = 1e-290;

    /** Information relative to plan beyond this is a mistake in units. */
    public static final double MOST = 1e6;

    /** Information relative to plan below this is a mistake in units, and its square no longer a number to divide by. */
    public static final double LEAST = 1e-100;

    private final ContinuationDensity density;
    private double upperSpent;
    private double lowerSpent;
    private boolean symmetric;

    /** A sequence without looks. */
    public BoundarySequence() {
        density = new ContinuationDensity(0);
        symmetric = true;
    }

    private BoundarySequence(BoundarySequence other) {
        density = other.density.copy();
        upperSpent = other.upperSpent;
        lowerSpent = other.lowerSpent;
        symmetric = other.symmetric;
    }

    /** A sequence that has taken the given looks already. */
    public static BoundarySequence resume(List<Look> looks) {
        BoundarySequence sequence = new BoundarySequence();
        looks.forEach(sequence::resume);
        return sequence;
    }

    /**
     * An independent sequence that has taken the same looks and goes on with the same bits; for looking ahead. Costs next
     * to nothing.
     */
    public BoundarySequence copy() {
        return new BoundarySequence(this);
    }

    /** Number of looks taken. */
    public int looks() {
        return density.looks();
    }

    /**
     * Takes the next look.
     *
     * @param information information relative to the planned maximum, at least {@link #LEAST_GROWTH} beyond the last
     *     look's and in [1e-100, 1e6]; may exceed 1
     * @param upperSpent error the upper tail may have spent up to this look, never falling; what it may spend at this look
     *     is the growth, and no growth means no boundary
     * @param lowerSpent likewise for the lower tail; 0 throughout makes the test one-sided
     * @throws IllegalArgumentException if information or spending is out of range; the sequence is then unchanged
     */
    public Look next(double information, double upperSpent, double lowerSpent) {
        prepare(information, upperSpent, lowerSpent);
        double upperShare = share(this.upperSpent, upperSpent);
        double lowerShare = share(this.lowerSpent, lowerSpent);
        double upper = density.upperBoundary(information, upperShare);
        double lower = symmetric && upperShare == lowerShare ? -upper : density.lowerBoundary(information, lowerShare);
        Look look = new Look(looks() + 1, information, upperSpent, lowerSpent, upper, StrictMath.min(lower, upper));
        accept(look);
        return look;
    }

    /**
     * Takes a look whose boundaries are known, without solving for them.
     *
     * @throws IllegalArgumentException if it does not follow the last look
     */
    public void resume(Look look) {
        if (look.number() != looks() + 1) {
            throw new IllegalArgumentException("number: " + look.number() + " (expected: " + (looks() + 1) + ")");
        }
        prepare(look.information(), look.upperSpent(), look.lowerSpent());
        accept(look);
    }

    private void prepare(double information, double upperSpent, double lowerSpent) {
        requireGrowth("information", information, density.information());
        requireSpending("upperSpent", upperSpent, this.upperSpent);
        requireSpending("lowerSpent", lowerSpent, this.lowerSpent);
        if (!(upperSpent + lowerSpent < 1)) {
            throw new IllegalArgumentException(
                    "upperSpent + lowerSpent: " + (upperSpent + lowerSpent) + " (expected: below 1)");
        }
        double reach =
                StrictMath.max(reach(share(this.upperSpent, upperSpent)), reach(share(this.lowerSpent, lowerSpent)));
        density.approach(information, reach, reach);
    }

    static void requireGrowth(String name, double information, double last) {
        if (!(information >= LEAST && information - last >= LEAST_GROWTH * information && information <= MOST)) {
            throw new IllegalArgumentException(name + ": " + information + " (expected: beyond " + last
                    + " by a millionth of itself at least, and in [" + LEAST + ", " + MOST + "])");
        }
    }

    private static void requireSpending(String name, double spent, double before) {
        if (!(spent >= before)) {
            throw new IllegalArgumentException(
                    name + ": " + spent + " (expected: at least the " + before + " spent at earlier looks)");
        }
    }

    private static double share(double before, double now) {
        double share = now - before;
        return share >= LEAST_SHARE ? share : 0;
    }

    /** How far out an unbounded side must be kept for a tail of this probability to be right. */
    private static double reach(double share) {
        return share > 0
                ? StrictMath.max(ContinuationDensity.TRUNCATION, Normal.upperQuantile(share) + 1)
                : ContinuationDensity.TRUNCATION;
    }

    private void accept(Look look) {
        symmetric = symmetric && look.upper() == -look.lower();
        upperSpent = look.upperSpent();
        lowerSpent = look.lowerSpent();
        density.stop(look.information(), look.lower(), look.upper());
    }
}
