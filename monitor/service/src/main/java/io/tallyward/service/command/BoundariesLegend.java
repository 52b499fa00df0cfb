package io.tallyward.service.command;

import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.TestPlan.Better;
import io.tallyward.engine.plan.TestPlan.Sides;
import io.tallyward.engine.plan.TestPlan.SpendingClock;
import java.util.ArrayList;
import java.util.List;

/** What the columns of the design mean, in plain language. */
final class BoundariesLegend {

    private static final int LABEL = 25;

    private final Plan plan;
    private final PlannedComparison comparison;
    private final List<String> lines = new ArrayList<>();

    BoundariesLegend(Plan plan, PlannedComparison comparison) {
        this.plan = plan;
        this.comparison = comparison;
    }

    List<String> lines() {
        lines.add("What the columns mean");
        boundaries();
        readings();
        chances();
        lines.addAll(BoundariesText.wrapped(
                "Looks may come at other moments than planned: the boundaries then follow the information that is in. All"
                        + " figures rest on the planned rates and the normal approximation. The plan's owner decides; not for"
                        + " clinical or safety decisions.",
                0));
        return lines;
    }

    private void boundaries() {
        boolean two = plan.test().sides() == Sides.TWO;
        entry("look", "number of the look" + BoundariesText.schedule(plan));
        if (comparison.plannedTime(comparison.looks().get(0)).isPresent()) {
            entry("until", "event time up to which its data go, if traffic comes at an even pace");
        }
        entry("information", "share of the planned information that is in at that look");
        if (plan.test().clock() == SpendingClock.CALENDAR) {
            entry("", "the clock is the calendar; the tables take it that both go at an even pace");
        }
        entry("trials", "planned trials of all variants by then, with the smallest effect");
        entry(
                "alpha spent",
                "chance of a false alarm up to and including that look, "
                        + (two ? "both directions together" : "in the direction of benefit"));
        boolean higher = plan.test().better() == Better.HIGHER;
        entry(
                "upper z",
                "stop for " + (higher ? "benefit" : "harm")
                        + " when the z-value of variant minus control is at or above it");
        entry(
                "lower z",
                "stop for " + (higher ? "harm" : "benefit")
                        + " when it is at or below it; - means no stop in that direction");
        if (plan.futility().isPresent()) {
            entry(
                    "futility z",
                    "a benefit has become unlikely when it is "
                            + (plan.test().better() == Better.HIGHER ? "below" : "above")
                            + " it: advice to stop, not an obligation; none at the last look");
        }
    }

    private void readings() {
        if (BoundariesText.unequal(plan)) {
            entry("alpha spent on", "the same, for each direction by itself");
        }
        entry(
                "one-look p",
                "one-sided p-value of a z just at the boundary, as if this were the only look; smaller is stricter");
        entry(
                "difference in points",
                "observed difference of the rates, in percentage points, at which the boundary is reached if the rates are"
                        + " about those planned");
    }

    private void chances() {
        entry(
                "without an effect",
                "if the variant is no better and no worse: every stop for benefit or harm is a false alarm");
        entry(
                "with the smallest effect",
                "if the effect is the smallest worth finding: benefit in the last row is the power");
        if (comparison.asMuchWorse().isPresent()) {
            entry("as much worse", "if the variant is worse by as much as the smallest effect is better");
        }
        if (comparison.scenarios().size() > 2) {
            entry("under the given rates", "if the success rates are those of --rates");
        }
        entry("no stop", "planned information used up without any stop");
        entry(
                "expected",
                "averages over many runs of this plan, at the end of a run"
                        + (plan.challengers().size() > 1 ? " that ends with this comparison" : "")
                        + "; how many trials bring the same information depends on the rates, so that trials and looks"
                        + " need not rise together");
    }

    private void entry(String column, String meaning) {
        lines.addAll(BoundariesText.wrapped(
                "  " + column + " ".repeat(LABEL - column.length()) + " " + meaning, 2 + LABEL + 1));
    }
}
