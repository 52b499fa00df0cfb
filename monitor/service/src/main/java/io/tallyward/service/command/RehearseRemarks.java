package io.tallyward.service.command;

import io.tallyward.engine.plan.Plan;
import io.tallyward.service.plan.PlanWords;
import io.tallyward.service.rehearse.RehearsalReport;
import java.util.List;
import java.util.Locale;
import java.util.Optional;

/** What somebody should know about a rehearsal before its figures are believed. */
final class RehearseRemarks {

    /** With less than this share of the planned trials most runs cannot get where the plan wants them. */
    private static final double ENOUGH = 0.9;

    private RehearseRemarks() {}

    /** Says so if views are rehearsed as if they were independent. */
    static Optional<String> views(Plan plan) {
        return PlanWords.countsViews(plan)
                ? Optional.of(
                        "Every unit is rehearsed with one view. Views of a unit resemble each other, so a run needs more"
                                + " of them by the design effect, and until then has less power than shown; the error is kept.")
                : Optional.empty();
    }

    /** Says so if far fewer units come in than the plan needs. */
    static Optional<String> traffic(RehearsalReport report, List<PlannedComparison> planned) {
        long needed = new OverallNeed(planned).trials();
        if (!(report.arrivals() < ENOUGH * needed)) {
            return Optional.empty();
        }
        return Optional.of(String.format(
                Locale.ROOT,
                "Too little traffic: the plan needs %,d trials of all variants, %.0f %% of them come in; it has less power"
                        + " than planned.",
                needed,
                Math.floor(100.0 * report.arrivals() / needed)));
    }
}
