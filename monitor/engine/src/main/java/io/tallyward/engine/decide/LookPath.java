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
     * @param clock what the correlation of looks goes by
     * @param fraction information relative to the planned maximum
     * @param spent error the tails may have spent by now
     * @param betaSpent type II error that futility may have spent by now; 0 when it spends none
     * @param end error the tails may spend in all, if the boundary of a last look is to be foreseen; else null
     */
    record Request(double clock, double fraction, TailSpending spent, double betaSpent, TailSpending end) {}

    /**
     * What a look gets.
     *
     * @param look its boundaries
     * @param futility futility bound on the scale on which a benefit is positive; negative infinity when there is none
     * @param critical boundary for a benefit at a single further look with full information, on the same scale; infinite
     *     when it was not asked for
     */
    record Bounds(Look look, double futility, double critical) {

        /** What is known of a look that needs no foresight. */
        static Bounds of(Look look, double futility) {
            return new Bounds(look, futility, Double.POSITIVE_INFINITY);
        }
    }

    /** The looks taken. */
    List<Look> looks() {
        return bounds.stream().map(Bounds::look).toList();
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

    /** The last look once more with other spending, as if it had not been taken before; the path stays as it is. */
    Look lastAgain(TailSpending spent) {
        Look last = bounds.get(bounds.size() - 1).look();
        List<Look> before = looks().subList(0, bounds.size() - 1);
        return BoundarySequence.resume(before).next(last.information(), spent.upper(), spent.lower());
    }

    private void add(Request request, Bounds found) {
        requests.add(request);
        bounds.add(found);
    }

    private Bounds solve(Request request) {
        for (int i = boundaries.looks(); i < bounds.size(); i++) {
            boundaries.resume(bounds.get(i).look());
        }
        Look look = boundaries.next(
                request.clock(), request.spent().upper(), request.spent().lower());
        return new Bounds(
                look,
                request.betaSpent() > 0 ? futility(request, look) : Double.NEGATIVE_INFINITY,
                request.end() == null ? Double.POSITIVE_INFINITY : critical(request));
    }

    private double futility(Request request, Look look) {
        if (futility == null) {
            futility = new FutilitySequence(drift);
        }
        for (int i = futility.looks(); i < bounds.size(); i++) {
            Look past = bounds.get(i).look();
            futility.resume(
                    requests.get(i).fraction(),
                    benefit(past),
                    requests.get(i).betaSpent(),
                    bounds.get(i).futility());
        }
        return futility.next(request.fraction(), benefit(look), request.betaSpent());
    }

    /** From here on both clocks are taken to run at the pace they have had so far. */
    private double critical(Request request) {
        return benefit(boundaries
                .copy()
                .next(
                        request.clock() / request.fraction(),
                        request.end().upper(),
                        request.end().lower()));
    }

    private double benefit(Look look) {
        return higherIsBetter ? look.upper() : -look.lower();
    }
}
