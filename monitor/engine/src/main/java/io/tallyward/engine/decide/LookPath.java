package io.tallyward.engine.decide;

import io.tallyward.statistics.boundary.BoundarySequence;
import io.tallyward.statistics.boundary.FutilitySequence;
import io.tallyward.statistics.boundary.Look;
import java.util.ArrayList;
import java.util.List;

/**
 * The looks of one comparison and their bounds. The numerical sequences behind them are brought up to date only when a look
 * has to be solved for; a look that was restored, or that a {@linkplain DecisionMemo memo} knows, costs them nothing.
 */
final class LookPath {

    private final double drift;
    private final boolean higherIsBetter;
    private final List<Request> requests = new ArrayList<>();
    private final List<Bounds> bounds = new ArrayList<>();
    private final BoundarySequence boundaries = new BoundarySequence();
    private FutilitySequence futility;
    private DecisionMemo.Node memo;

    /**
     * A path that has no looks yet.
     *
     * @param drift expected z at full information under the smallest effect worth finding; positive
     * @param higherIsBetter whether a benefit lies above
     * @param memo what is known of paths that begin like this one
     */
    LookPath(double drift, boolean higherIsBetter, DecisionMemo.Node memo) {
        this.drift = drift;
        this.higherIsBetter = higherIsBetter;
        this.memo = memo;
    }

    /**
     * What a look brings along.
     *
     * @param information relative to the planned maximum
     * @param upperSpent error the upper tail may have spent by now
     * @param lowerSpent error the lower tail may have spent by now
     * @param betaSpent type II error that futility may have spent by now; 0 when there is no futility bound
     */
    record Request(double information, double upperSpent, double lowerSpent, double betaSpent) {}

    /**
     * What a look gets.
     *
     * @param look its boundaries
     * @param futility futility bound on the scale on which a benefit is positive; negative infinity when there is none
     */
    record Bounds(Look look, double futility) {}

    int looks() {
        return bounds.size();
    }

    /** Takes the next look. */
    Bounds next(Request request) {
        Bounds found = memo.find(request, () -> solve(request));
        memo = memo.after(request);
        add(request, found);
        return found;
    }

    /** Takes a look whose bounds are known. */
    void resume(Request request, Bounds known) {
        memo = DecisionMemo.Node.FORGETFUL;
        add(request, known);
    }

    /** The last look once more with another request, as if it had never been taken; the path stays as it is. */
    Look lastAgain(Request request) {
        List<Look> before =
                bounds.subList(0, bounds.size() - 1).stream().map(Bounds::look).toList();
        return BoundarySequence.resume(before).next(request.information(), request.upperSpent(), request.lowerSpent());
    }

    private void add(Request request, Bounds found) {
        requests.add(request);
        bounds.add(found);
    }

    private Bounds solve(Request request) {
        for (int i = boundaries.looks(); i < bounds.size(); i++) {
            boundaries.resume(bounds.get(i).look());
        }
        Look look = boundaries.next(request.information(), request.upperSpent(), request.lowerSpent());
        return new Bounds(look, request.betaSpent() > 0 ? futility(request, look) : Double.NEGATIVE_INFINITY);
    }

    private double futility(Request request, Look look) {
        if (futility == null) {
            futility = new FutilitySequence(drift);
        }
        for (int i = futility.looks(); i < bounds.size(); i++) {
            Look past = bounds.get(i).look();
            futility.resume(
                    past.information(),
                    benefit(past),
                    requests.get(i).betaSpent(),
                    bounds.get(i).futility());
        }
        return futility.next(look.information(), benefit(look), request.betaSpent());
    }

    private double benefit(Look look) {
        return higherIsBetter ? look.upper() : -look.lower();
    }
}
