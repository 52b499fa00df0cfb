package io.tallyward.service.command;

import io.tallyward.engine.plan.LookSchedule;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.Tail;
import io.tallyward.engine.plan.TestPlan;
import io.tallyward.engine.plan.TestPlan.AlphaSharing;
import io.tallyward.service.command.PlannedComparison.PassedOn;
import io.tallyward.service.config.document.ScalarType;
import io.tallyward.service.plan.PlanWords;
import io.tallyward.statistics.proportion.SampleSize;
import java.util.ArrayList;
import java.util.HashMap;
import java.util.List;
import java.util.Locale;
import java.util.Map;
import java.util.stream.Collectors;

/** The design of a plan in words and tables, at most 100 columns wide. */
final class BoundariesText {

    private static final int LABEL = 15;

    /** What a line may take; terminals are rarely narrower. */
    static final int WIDTH = 100;

    private final Plan plan;
    private final TestPlan test;
    private final BoundariesTables tables;

    /** @param allLooks whether long plans are shown look by look */
    BoundariesText(Plan plan, boolean allLooks) {
        this.plan = plan;
        this.test = plan.test();
        tables = new BoundariesTables(plan, allLooks);
    }

    List<String> lines(List<PlannedComparison> planned) {
        List<String> lines = new ArrayList<>(wrapped(plan.experiment() + ": " + plan.question(), 0));
        OverallNeed need = new OverallNeed(planned);
        if (need.differs()) {
            lines.add("");
            lines.addAll(wrapped(need.sentence(), 0));
        }
        Map<String, String> shown = new HashMap<>();
        for (PlannedComparison comparison : planned) {
            String name = comparison.challenger().name();
            List<String> body = comparison(comparison);
            String same = shown.putIfAbsent(String.join("\n", body), name);
            lines.add("");
            lines.add(name + " against " + plan.control().name()
                    + (same == null ? "" : ": the same numbers as for " + same + "."));
            if (same == null) {
                lines.addAll(body);
            }
        }
        if (planned.size() > 1) {
            lines.add("");
            lines.addAll(sharing(planned.get(0)));
        }
        List<String> remarks = BoundariesRemarks.of(planned);
        if (!remarks.isEmpty()) {
            lines.add("");
            lines.add("To be considered");
            remarks.forEach(remark -> lines.addAll(wrapped("- " + remark, 2)));
        }
        lines.add("");
        lines.addAll(new BoundariesLegend(plan, planned.get(0)).lines());
        return lines;
    }

    private List<String> comparison(PlannedComparison comparison) {
        List<String> lines = new ArrayList<>(facts(comparison));
        lines.add("");
        lines.add("When to stop" + tables.selection(comparison));
        lines.addAll(tables.boundaries(comparison).lines());
        lines.add("");
        lines.add("What it takes to stop at that look");
        lines.addAll(tables.readings(comparison).lines());
        lines.add("");
        lines.add("Chance to have stopped by then" + (plan.futility().isPresent() ? ", futility obeyed" : ""));
        lines.addAll(tables.chances(comparison).lines());
        lines.add("");
        lines.add("How it ends");
        lines.addAll(tables.endings(comparison).lines());
        return lines;
    }

    private List<String> facts(PlannedComparison comparison) {
        List<String> lines = new ArrayList<>();
        lines.addAll(fact("tests", levels(comparison)));
        lines.addAll(fact("spending", spending()));
        lines.addAll(fact("clock", PlanWords.clock(test)));
        lines.addAll(fact("information", PlanWords.measure(plan)));
        plan.futility()
                .ifPresent(rule -> lines.addAll(fact(
                        "futility",
                        PlanWords.futility(rule) + "; advice that may be overruled at no cost in false alarms")));
        lines.addAll(size(comparison));
        return lines;
    }

    private List<String> size(PlannedComparison comparison) {
        List<String> lines = new ArrayList<>();
        double base = test.baseline();
        lines.addAll(fact(
                "looks for",
                PlanWords.shortest(base) + " -> " + PlanWords.shortest(base + test.signedEffect()) + ", "
                        + String.format(
                                Locale.ROOT,
                                "%+.3g points or %+.3g %% of the rate, with power ",
                                100 * test.signedEffect(),
                                100 * test.signedEffect() / base)
                        + PlanWords.shortest(test.power())));
        lines.addAll(fact("needs", needs(comparison)));
        SampleSize single = comparison.singleLook();
        lines.addAll(fact(
                "single look",
                count(Math.ceil(single.population()))
                        + " trials if read once, at the end; looking on the way costs a factor of "
                        + String.format(Locale.ROOT, "%.4f", comparison.design().inflation())));
        lines.addAll(fact(
                "drift",
                String.format(
                        Locale.ROOT,
                        "%.4f towards the benefit, the z to expect at the end with the smallest effect%s; maximum information %,.0f",
                        comparison.design().drift(),
                        comparison.scenarios().stream()
                                .skip(2)
                                .map(rates ->
                                        String.format(Locale.ROOT, " (%.4f under the given rates)", rates.drift()))
                                .collect(Collectors.joining()),
                        comparison.design().maximumInformation())));
        return lines;
    }

    private String levels(PlannedComparison comparison) {
        String benefit =
                "benefit at level " + PlanWords.shortest(comparison.design().benefitLevel());
        return test.harm().isEmpty()
                ? benefit + ", one-sided; harm is not tested"
                : benefit + ", harm at level "
                        + PlanWords.shortest(comparison.design().harmLevel()) + "; two-sided, together "
                        + PlanWords.shortest(comparison.design().alpha());
    }

    private String spending() {
        String benefit = PlanWords.spending(test.benefit());
        String harm = test.harm().map(PlanWords::spending).orElse(benefit);
        return harm.equals(benefit) ? benefit : "benefit " + benefit + "; harm " + harm;
    }

    private String needs(PlannedComparison comparison) {
        return count(comparison.plannedTrials()) + " trials of all variants ("
                + comparison.trialsPerVariant().entrySet().stream()
                        .map(entry -> entry.getKey() + " " + count(entry.getValue()))
                        .collect(Collectors.joining(", "))
                + "), " + count(Math.ceil(comparison.trialsPerDay())) + " a day to have them within "
                + ScalarType.written(plan.run().atMost());
    }

    private List<String> sharing(PlannedComparison comparison) {
        int challengers = plan.challengers().size();
        boolean passOn = test.sharing() == AlphaSharing.PASS_ON;
        List<String> lines = new ArrayList<>();
        lines.add("How " + challengers + " comparisons share alpha " + PlanWords.shortest(test.alpha()));
        lines.addAll(wrapped(
                passOn
                        ? "pass-on: each starts with an even share. One that is found in a direction leaves its share of it to"
                                + " all that are not found in that direction, ended or not; the boundaries of those still open"
                                + " come closer from their next look on. Below: the level of benefit if so many others were"
                                + " found for benefit, that of harm if so many were found for harm."
                        : "split: each keeps an even share, whatever becomes of the others.",
                0));
        if (passOn) {
            Table table = new Table("others found", "benefit level", "harm level");
            table.row(
                    "0",
                    level(comparison.design().benefitLevel()),
                    level(comparison.design().harmLevel()));
            for (PassedOn after : comparison.passedOn()) {
                table.row(String.valueOf(after.found()), level(after.benefit()), level(after.harm()));
            }
            lines.addAll(table.lines());
        }
        DunnettValue.of(plan)
                .ifPresent(value -> lines.addAll(wrapped(
                        String.format(
                                Locale.ROOT,
                                "For reference, all read once at one look: %s of %.4f is needed by Dunnett's test at %s, %.4f by"
                                        + " an even split.",
                                value.bothSides() ? "a z-value in either direction" : "a z-value towards the benefit",
                                value.critical(),
                                PlanWords.shortest(value.alpha()),
                                value.evenSplit()),
                        0)));
        return lines;
    }

    private static String level(double level) {
        return level == 0 ? BoundariesTables.NONE : PlanWords.shortest(level);
    }

    private static List<String> fact(String label, String text) {
        return wrapped("  " + label + " ".repeat(LABEL - 2 - label.length()) + text, LABEL);
    }

    /** A sentence in lines that fit, all but the first indented; a number keeps its per cent sign. */
    static List<String> wrapped(String text, int indent) {
        List<String> lines = new ArrayList<>();
        String rest = text;
        while (rest.length() > WIDTH) {
            int end = rest.lastIndexOf(' ', WIDTH);
            end = rest.startsWith(" %", end) ? rest.lastIndexOf(' ', end - 1) : end;
            if (end <= indent) {
                break;
            }
            lines.add(rest.substring(0, end).stripTrailing());
            rest = " ".repeat(indent) + rest.substring(end).strip();
        }
        lines.add(rest);
        return lines;
    }

    private static String count(double value) {
        return String.format(Locale.ROOT, "%,.0f", value);
    }

    /** How often a look is planned, if by time. */
    static String schedule(Plan plan) {
        return plan.looks() instanceof LookSchedule.Every every
                ? ", one every " + ScalarType.written(every.interval())
                : "";
    }

    /** Whether the directions differ in level or spending. */
    static boolean unequal(Plan plan) {
        Tail benefit = plan.test().benefit();
        return plan.test().harm().filter(harm -> !harm.equals(benefit)).isPresent();
    }
}
