package io.tallyward.service.command;

import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.TestPlan.Sides;
import io.tallyward.service.rehearse.Ending;
import io.tallyward.service.rehearse.RehearsalReport;
import io.tallyward.service.rehearse.RehearsalReport.Arm;
import io.tallyward.service.rehearse.RehearsalReport.Estimates;
import java.util.ArrayList;
import java.util.List;
import java.util.Locale;
import java.util.Optional;
import java.util.stream.Collectors;

/** What the rows of a rehearsal mean, in plain language. */
final class RehearseLegend {

    private static final int LABEL = 13;

    private final Plan plan;
    private final RehearsalReport report;
    private final List<PlannedComparison> planned;
    private final List<String> lines = new ArrayList<>();

    RehearseLegend(Plan plan, RehearsalReport report, List<PlannedComparison> planned) {
        this.plan = plan;
        this.report = report;
        this.planned = planned;
    }

    List<String> lines() {
        entry(
                "error",
                "how far chance in this rehearsal may have moved the figure (one standard error); more runs make it"
                        + " smaller; - where these runs do not tell");
        verdicts();
        entry(
                "uncorrected",
                "a single-look test at " + percent(plan.test().alpha())
                        + (plan.test().sides() == Sides.TWO ? ", two-sided" : ", one-sided")
                        + ", read at every look as if it were the only one: why peeking needs boundaries");
        entry("withheld", "the data were not trusted at the end, so no verdict was told");
        report.arms().stream()
                .flatMap(arm -> arm.estimates().stream())
                .findFirst()
                .ifPresent(this::estimates);
        return lines;
    }

    private void verdicts() {
        boolean several = report.arms().size() > 1;
        if (several) {
            entry(
                    "of all runs",
                    "benefit of one variant and harm by another may meet in a run; one without either is withheld if any"
                            + " variant ended so, else futile if all did, else used up");
        }
        if (report.falseAlarm().isPresent()) {
            entry(
                    "verdict",
                    several
                            ? "on a variant without a true difference every one is a false alarm; over all such variants"
                                    + " the plan allows " + percent(plan.test().alpha())
                            : "without a true difference every one is a false alarm; the plan allows "
                                    + percent(plan.test().alpha()));
        }
        if (report.arms().stream().anyMatch(arm -> arm.trueDifference() != 0)) {
            entry(
                    "benefit",
                    (several ? "of each variant by itself: " : "")
                            + "with a true benefit this is the chance to find it; the plan asks for "
                            + percent(plan.test().power()) + " at the smallest effect" + obeyed());
        }
    }

    /** The planned power once futility is obeyed, as it is here, where that makes it another. */
    private String obeyed() {
        if (plan.futility().isEmpty()) {
            return "";
        }
        String powers = planned.stream()
                .map(comparison ->
                        percent(comparison.underSmallestEffect().obeyed().power()))
                .distinct()
                .collect(Collectors.joining(" or "));
        return " and, with futility obeyed as it is here, leads to expect " + powers;
    }

    private void estimates(Estimates estimates) {
        entry("bias", "mean estimate less the truth; a naive estimate exaggerates because runs stop when it is large");
        entry("too low", "share of estimates below the truth: 50 % is right");
        entry("interval", "promises " + level(estimates.level()) + "; a repeated one at least that, at every look");
        Optional<Arm> futile = report.arms().stream()
                .filter(arm -> arm.endings().get(Ending.FUTILITY).count() > 0)
                .findFirst();
        if (futile.isPresent()) {
            entry(
                    "futility",
                    "runs given up as futile have no adjusted estimate and are left out of the estimates; those that"
                            + " are left were picked by their results, so that 50 % and the promise hold for them no"
                            + " longer. To judge the estimates, rehearse the plan without its futility rule");
        }
    }

    private void entry(String label, String meaning) {
        lines.addAll(BoundariesText.wrapped(label + " ".repeat(LABEL - label.length()) + meaning, LABEL));
    }

    private static String percent(double share) {
        return RehearseText.percent(share);
    }

    private static String level(double level) {
        return String.format(Locale.ROOT, "%.4g %%", 100 * level);
    }
}
