package io.tallyward.service.command;

import io.tallyward.service.rehearse.RehearsalReport;
import java.util.List;
import java.util.Locale;
import java.util.Optional;

/** What somebody should know about a rehearsal before its figures are believed. */
final class RehearseRemarks {

    /** With less than this share of the planned trials most runs cannot get where the plan wants them. */
    private static final double ENOUGH = 0.9;

    private RehearseRemarks() {}

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
