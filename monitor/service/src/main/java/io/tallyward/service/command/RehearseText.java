package io.tallyward.service.command;

import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.TestPlan.Sides;
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

    private final Plan plan;
    private final RehearsalRequest request;
    private final RehearsalReport report;

    RehearseText(Plan plan, RehearsalRequest request, RehearsalReport report) {
        this.plan = plan;
        this.request = request;
        this.report = report;
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
        lines.addAll(legend());
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
        return List.of(
                counted(request.runs(), "run") + ", seed " + request.seed() + "; up to "
                        + counted(report.arrivals(), "unit") + " in "
                        + ScalarType.written(plan.run().atMost()) + ", split "
                        + (request.fixedSplit() ? "exactly as planned" : "at random"),
                rates.toString(),
                "counts are looked through every " + ScalarType.written(report.step()) + ", "
                        + counted(report.steps(), "time") + " in a full run");
    }

    private Table whatHappened() {
        Table table = new Table("of all runs", "share", "error", "95 % interval");
        row(table, "verdict of benefit or harm", report.rejection());
        row(table, "  benefit", report.benefit());
        row(table, "  harm", report.harm());
        row(table, "given up as futile", report.futility());
        row(table, "used up without a finding", report.exhausted());
        row(table, "verdict withheld", report.withheld());
        row(table, "false alarm of the split check", report.mismatch());
        row(table, "uncorrected peeking would find something", report.naivePeeking());
        return table;
    }

    private Table howLong() {
        Table table = new Table("until the last verdict", "mean", "error");
        row(table, "looks", report.looks(), 2);
        row(table, "trials, all variants", report.trials(), 0);
        row(table, "days", report.days(), 2);
        return table;
    }

    private List<String> challenger(Arm arm) {
        List<String> lines = new ArrayList<>();
        lines.add(arm.variant() + " against " + plan.control().name() + ", true difference "
                + shortest(arm.trueDifference()));
        if (report.arms().size() > 1) {
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
        cells.add(String.valueOf(stops.stream().mapToLong(Stop::total).sum()));
        for (Ending ending : Ending.values()) {
            cells.add(String.valueOf(
                    stops.stream().mapToLong(stop -> stop.runs().get(ending)).sum()));
        }
        table.row(cells.toArray(String[]::new));
    }

    private static Table estimates(Estimates estimates) {
        Table table = new Table(
                "difference, at the last look", "bias", "error", "too low", "interval holds the truth", "error");
        table.row(
                "naive: as observed",
                signed(estimates.naiveBias().value()),
                plain(estimates.naiveBias().standardError()),
                percent(estimates.naiveTooLow().value()),
                percent(estimates.naiveCoverage().value()),
                percent(estimates.naiveCoverage().standardError()));
        table.row(
                "adjusted: median-unbiased, stage-wise",
                signed(estimates.adjustedBias().value()),
                plain(estimates.adjustedBias().standardError()),
                percent(estimates.adjustedTooLow().value()),
                percent(estimates.stagewiseCoverage().value()),
                percent(estimates.stagewiseCoverage().standardError()));
        return table.row(
                "repeated confidence interval",
                "-",
                "-",
                "-",
                percent(estimates.repeatedCoverage().value()),
                percent(estimates.repeatedCoverage().standardError()));
    }

    private List<String> legend() {
        boolean effect = report.arms().stream().anyMatch(arm -> arm.trueDifference() != 0);
        boolean two = plan.test().sides() == Sides.TWO;
        List<String> lines = new ArrayList<>(List.of(
                "error        how far chance in this rehearsal may have moved the figure (one standard error); more runs make it smaller",
                (effect
                        ? "verdict      with a true difference this is the chance to find it; the plan asks for "
                                + percent(plan.test().power()) + " at the smallest effect"
                        : "verdict      without a true difference every one is a false alarm; the plan allows "
                                + percent(plan.test().alpha())),
                "uncorrected  a single-look test at " + percent(plan.test().alpha())
                        + (two ? ", two-sided" : ", one-sided")
                        + ", read at every look as if it were the only one: why peeking needs boundaries",
                "withheld     the data were not trusted at the end, so no verdict was told"));
        report.arms().stream()
                .flatMap(arm -> arm.estimates().stream())
                .findFirst()
                .ifPresent(estimates -> {
                    lines.add(
                            "bias         mean estimate less the truth; a naive estimate exaggerates because runs stop when it is large");
                    lines.add("too low      share of estimates below the truth: 50 % is right");
                    lines.add("interval     promises " + percent(estimates.level())
                            + "; a repeated one at least that, at every look");
                });
        return lines;
    }

    private static void row(Table table, String name, Rate rate) {
        table.row(
                name,
                percent(rate.value()),
                percent(rate.standardError()),
                percent(rate.interval().lower()) + " to "
                        + percent(rate.interval().upper()));
    }

    private static void row(Table table, String name, Mean mean, int places) {
        table.row(name, decimals(mean.value(), places), decimals(mean.standardError(), places + 1));
    }

    private static String percent(double share) {
        return decimals(100 * share, 2) + " %";
    }

    private static String signed(double value) {
        return String.format(Locale.ROOT, "%+.6f", value);
    }

    private static String plain(double value) {
        return decimals(value, 6);
    }

    private static String decimals(double value, int places) {
        return String.format(Locale.ROOT, "%." + places + "f", value);
    }

    private static String counted(long count, String what) {
        return count + " " + what + (count == 1 ? "" : "s");
    }

    /** A figure without the noise of binary arithmetic. */
    private static String shortest(double value) {
        return String.valueOf(Math.round(value * 1e9) / 1e9);
    }
}
