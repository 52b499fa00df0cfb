package io.tallyward.service.command;

import io.tallyward.engine.plan.Plan;
import io.tallyward.service.config.document.ScalarType;
import io.tallyward.service.rehearse.Ending;
import io.tallyward.service.rehearse.Mean;
import io.tallyward.service.rehearse.Rate;
import io.tallyward.service.rehearse.RehearsalReport;
import io.tallyward.service.rehearse.RehearsalReport.Arm;
import io.tallyward.service.rehearse.RehearsalReport.Estimates;
import io.tallyward.service.rehearse.RehearsalReport.Stop;
import io.tallyward.service.rehearse.RehearsalRequest;
import java.util.ArrayList;
import java.util.List;
import java.util.Locale;

/** A rehearsal in words and tables. */
final class RehearseText {

    /** More rows than this in the table of stops are put together. */
    private static final int MOST_ROWS = 20;

    /** Stands for an error that these runs do not tell. */
    private static final String UNKNOWN = "-";

    private final Plan plan;
    private final RehearsalRequest request;
    private final RehearsalReport report;
    private final List<PlannedComparison> planned;
    private final boolean several;

    /** @param planned what the plan means for every challenger */
    RehearseText(Plan plan, RehearsalRequest request, RehearsalReport report, List<PlannedComparison> planned) {
        this.plan = plan;
        this.request = request;
        this.report = report;
        this.planned = planned;
        several = report.arms().size() > 1;
    }

    List<String> lines() {
        List<String> lines = new ArrayList<>();
        lines.add(plan.experiment() + ": " + plan.question());
        lines.addAll(premises());
        lines.add("");
        lines.addAll(whatHappened().lines());
        lines.add("");
        lines.addAll(howLong().lines());
        for (Arm arm : report.arms()) {
            lines.add("");
            lines.addAll(challenger(arm));
        }
        lines.add("");
        lines.addAll(new RehearseLegend(plan, report, planned).lines());
        return lines;
    }

    private List<String> premises() {
        StringBuilder rates = new StringBuilder("true rates:");
        double[] trueRates = request.rates();
        for (int i = 0; i < trueRates.length; i++) {
            rates.append(i == 0 ? " " : ", ")
                    .append(plan.variants().get(i).name())
                    .append(' ')
                    .append(trueRates[i]);
        }
        List<String> lines = new ArrayList<>(List.of(
                counted(request.runs(), "run") + ", seed " + request.seed() + "; up to "
                        + counted(report.arrivals(), "unit") + " in "
                        + ScalarType.written(plan.run().atMost()) + ", split "
                        + (request.fixedSplit() ? "exactly as planned" : "at random"),
                rates.toString(),
                "counts are considered every " + ScalarType.written(report.step()) + ", "
                        + counted(report.steps(), "time") + " in a full run"));
        if (several) {
            lines.add("a variant whose verdict is told is no longer shown; its units go to the others");
        }
        RehearseRemarks.views(plan).ifPresent(remark -> lines.addAll(BoundariesText.wrapped(remark, 0)));
        RehearseRemarks.traffic(report, planned).ifPresent(remark -> lines.addAll(BoundariesText.wrapped(remark, 0)));
        return lines;
    }

    private Table whatHappened() {
        Table table = new Table("of all runs", "share", "error", "95 % interval");
        row(table, (several ? "at least one variant with " : "verdict of ") + "benefit or harm", report.rejection());
        row(table, several ? "  at least one with benefit" : "  benefit", report.benefit());
        row(table, several ? "  at least one with harm" : "  harm", report.harm());
        if (several) {
            report.falseAlarm().ifPresent(rate -> row(table, "  at least one that has no true difference", rate));
        }
        row(table, several ? "all given up as futile" : "given up as futile", report.futility());
        row(table, "used up without a finding", report.exhausted());
        row(table, "verdict withheld", report.withheld());
        row(table, "false alarm of the split check", report.mismatch());
        row(table, "uncorrected peeking would find something", report.naivePeeking());
        return table;
    }

    private Table howLong() {
        Table table = new Table("until the last verdict", "mean", "error");
        row(table, "looks", report.looks(), 2);
        row(table, "looks that waited", report.waited(), 2);
        row(table, "trials, all variants", report.trials(), 0);
        row(table, "days", report.days(), 2);
        return table;
    }

    private List<String> challenger(Arm arm) {
        List<String> lines = new ArrayList<>();
        lines.add(arm.variant() + " against " + plan.control().name() + ", true difference "
                + trueDifference(arm.trueDifference()));
        if (several) {
            lines.addAll(endings(arm).lines());
        }
        lines.addAll(stops(arm).lines());
        arm.estimates().ifPresent(estimates -> {
            lines.add("");
            lines.addAll(estimates(estimates).lines());
        });
        return lines;
    }

    private static Table endings(Arm arm) {
        Table table = new Table("of all runs", "share", "error", "95 % interval");
        row(table, "verdict of benefit or harm", arm.rejection());
        for (Ending ending : Ending.values()) {
            row(table, "  " + RehearseJson.code(ending), arm.endings().get(ending));
        }
        row(table, "uncorrected peeking", arm.naivePeeking());
        return table;
    }

    private static Table stops(Arm arm) {
        Table table = new Table("stopped at look", "runs", "benefit", "harm", "futility", "exhausted", "withheld");
        List<Stop> stops = arm.stops();
        int together = (stops.size() + MOST_ROWS - 1) / MOST_ROWS;
        for (int i = 0; i < stops.size(); i += together) {
            row(table, stops.subList(i, Math.min(stops.size(), i + together)));
        }
        return table;
    }

    private static void row(Table table, List<Stop> stops) {
        int first = stops.get(0).look();
        int last = stops.get(stops.size() - 1).look();
        List<String> cells = new ArrayList<>();
        cells.add(
                first == 0 && last == 0
                        ? "without a look"
                        : first == last ? String.valueOf(first) : first + " to " + last);
        cells.add(count(stops.stream().mapToLong(Stop::total).sum()));
        for (Ending ending : Ending.values()) {
            cells.add(count(
                    stops.stream().mapToLong(stop -> stop.runs().get(ending)).sum()));
        }
        table.row(cells.toArray(String[]::new));
    }

    private static Table estimates(Estimates estimates) {
        Table table = new Table(
                "difference in points, at the last look",
                "bias",
                "error",
                "too low",
                "interval holds the truth",
                "error");
        table.row(
                "naive: as observed",
                signed(estimates.naiveBias().value()),
                error(estimates.naiveBias()),
                percent(estimates.naiveTooLow().value()),
                percent(estimates.naiveCoverage().value()),
                error(estimates.naiveCoverage()));
        table.row(
                "adjusted: median-unbiased, stage-wise",
                signed(estimates.adjustedBias().value()),
                error(estimates.adjustedBias()),
                percent(estimates.adjustedTooLow().value()),
                percent(estimates.stagewiseCoverage().value()),
                error(estimates.stagewiseCoverage()));
        return table.row(
                "repeated confidence interval",
                "-",
                "-",
                "-",
                percent(estimates.repeatedCoverage().value()),
                error(estimates.repeatedCoverage()));
    }

    private static void row(Table table, String name, Rate rate) {
        table.row(
                name,
                percent(rate.value()),
                error(rate),
                percent(rate.interval().lower()) + " to "
                        + percent(rate.interval().upper()));
    }

    private static void row(Table table, String name, Mean mean, int places) {
        table.row(
                name,
                decimals(mean.value(), places),
                mean.count() > 1 ? decimals(mean.standardError(), places + 1) : UNKNOWN);
    }

    /** What happened never or always has an error too, but these runs do not tell which. */
    private static String error(Rate rate) {
        return rate.count() == 0 || rate.count() == rate.of() ? UNKNOWN : percent(rate.standardError());
    }

    /** The error of a mean difference, in points. */
    private static String error(Mean difference) {
        return difference.count() > 1 ? decimals(100 * difference.standardError(), 4) : UNKNOWN;
    }

    static String percent(double share) {
        return decimals(100 * share, 2) + " %";
    }

    private static String signed(double value) {
        return String.format(Locale.ROOT, "%+.4f", 100 * value);
    }

    private static String trueDifference(double value) {
        return value == 0 ? "0" : String.format(Locale.ROOT, "%+.3f points", 100 * value);
    }

    private static String decimals(double value, int places) {
        return String.format(Locale.ROOT, "%,." + places + "f", value);
    }

    private static String counted(long count, String what) {
        return count(count) + " " + what + (count == 1 ? "" : "s");
    }

    private static String count(long count) {
        return String.format(Locale.ROOT, "%,d", count);
    }
}
