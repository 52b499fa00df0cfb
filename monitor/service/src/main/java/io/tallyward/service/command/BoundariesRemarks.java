package io.tallyward.service.command;

import io.tallyward.engine.plan.Plan;
import io.tallyward.service.command.PlannedComparison.FirstCell;
import io.tallyward.service.command.PlannedComparison.Scenario;
import io.tallyward.service.config.document.ScalarType;
import io.tallyward.service.plan.PlanWords;
import java.util.ArrayList;
import java.util.LinkedHashMap;
import java.util.List;
import java.util.Locale;
import java.util.Map;
import java.util.Optional;
import java.util.function.Function;

/** What somebody should know before a plan is run: where it promises less than it seems to. */
final class BoundariesRemarks {

    /** How much power futility may cost before it is said. */
    private static final double POWER_LOSS = 0.005;

    /** How much of the harm futility may hide before it is said. */
    private static final double HARM_LOSS = 0.02;

    private BoundariesRemarks() {}

    /** @param planned the comparisons of a plan, at least one */
    static List<String> of(List<PlannedComparison> planned) {
        List<String> remarks = new ArrayList<>();
        planned.forEach(comparison -> few(comparison, remarks));
        remarks.addAll(together(planned, BoundariesRemarks::waiting));
        remarks.addAll(together(planned, IdleLooks::remark));
        remarks.addAll(together(planned, BoundariesRemarks::lostPower));
        remarks.addAll(together(planned, BoundariesRemarks::hiddenHarm));
        plan(planned.get(0).plan(), remarks);
        return remarks;
    }

    /** One remark for all challengers that it holds of, their names in front. */
    private static List<String> together(
            List<PlannedComparison> planned, Function<PlannedComparison, Optional<String>> remark) {
        Map<String, List<String>> challengers = new LinkedHashMap<>();
        for (PlannedComparison comparison : planned) {
            remark.apply(comparison)
                    .ifPresent(sentence -> challengers
                            .computeIfAbsent(sentence, absent -> new ArrayList<>())
                            .add(comparison.challenger().name()));
        }
        return challengers.entrySet().stream()
                .map(entry -> String.join(", ", entry.getValue()) + ": " + entry.getKey())
                .toList();
    }

    private static void plan(Plan plan, List<String> remarks) {
        if (PlanWords.countsViews(plan)) {
            remarks.add(
                    "A trial is a view. All numbers of trials are those of independent views; views of a unit resemble"
                            + " each other, so multiply them by the design effect (1 + (views per unit - 1) times the correlation"
                            + " of views of a unit, if all units have equally many; every look of a run says what it was).");
        }
        if (!plan.run().atLeast().isZero()) {
            remarks.add("No benefit is declared in the first "
                    + ScalarType.written(plan.run().atLeast())
                    + (plan.test().harm().isPresent() ? "; harm may stop at once." : "."));
        }
        if (!plan.epochs().isEmpty()) {
            remarks.add("The split is planned to change: trials are those at the shares of the last epoch, and more are"
                    + " needed if much comes in at others.");
        }
    }

    private static void few(PlannedComparison comparison, List<String> remarks) {
        int minimum = comparison.plan().test().minimumPerCell();
        comparison.firstLook().forEach((name, cell) -> {
            String remark = few(name, cell, minimum) + waits(comparison, minimum);
            if (cell.few() && !remarks.contains(remark)) {
                remarks.add(remark);
            }
        });
    }

    private static String few(String name, FirstCell cell, int minimum) {
        return String.format(
                Locale.ROOT,
                "At the first look %s is expected to have %.1f successes and %,.1f failures; below %.0f of either the"
                        + " normal approximation is rough there. A look waits for %d of each (test.minimum-per-cell)",
                name,
                cell.successes(),
                cell.failures(),
                PlannedComparison.FEW,
                minimum);
    }

    /** How many looks come before every variant is expected to have the least it needs. */
    private static String waits(PlannedComparison comparison, int minimum) {
        double first = comparison.looks().get(0).information();
        double fewest = comparison.firstLook().values().stream()
                .mapToDouble(cell -> Math.min(cell.successes(), cell.failures()))
                .min()
                .orElse(minimum);
        long waiting = comparison.looks().stream()
                .filter(look -> fewest * look.information() / first < minimum)
                .count();
        if (waiting == 0) {
            return ".";
        }
        return waiting == 1
                ? "; look 1 is expected to wait for them."
                : "; looks 1 to " + waiting + " are expected to wait for them.";
    }

    private static Optional<String> waiting(PlannedComparison comparison) {
        int waiting = comparison.design().looksExpectedToWait(comparison.plan(), comparison.challenger());
        if (waiting == 0) {
            return Optional.empty();
        }
        return Optional.of(String.format(
                Locale.ROOT,
                "%d of the %d looks are expected to wait for more successes; few of them in arms of unequal size would"
                        + " distort the error. More even shares would help.",
                waiting,
                comparison.design().looks().size()));
    }

    private static Optional<String> lostPower(PlannedComparison comparison) {
        double power = comparison.underSmallestEffect().obeyed().power();
        double planned = comparison.plan().test().power();
        if (!(power < planned - POWER_LOSS)) {
            return Optional.empty();
        }
        return Optional.of(String.format(
                Locale.ROOT,
                "with futility obeyed the power is %.3f instead of the planned %s; a lower threshold costs less, and a"
                        + " spending rule (futility.spending) is allowed for when the trials are planned.",
                power,
                PlanWords.shortest(planned)));
    }

    /** A bound for futility above that for harm is met first: who obeys it is not told of most harm. */
    private static Optional<String> hiddenHarm(PlannedComparison comparison) {
        Optional<Scenario> worse = comparison.asMuchWorse();
        if (comparison.plan().futility().isEmpty() || worse.isEmpty()) {
            return Optional.empty();
        }
        double obeyed = last(worse.get().obeyed().harm());
        double overruled = last(worse.get().overruled().harm());
        if (!(obeyed < overruled - HARM_LOSS)) {
            return Optional.empty();
        }
        return Optional.of(String.format(
                Locale.ROOT,
                "with futility obeyed, a variant as much worse as the smallest effect is called harm in %.1f %%, futile in"
                        + " %.1f %%; with futility overruled, harm in %.1f %%. Where it matters to know of harm, overrule"
                        + " futility or plan without it.",
                100 * obeyed,
                100 * last(worse.get().obeyed().futility()),
                100 * overruled));
    }

    private static double last(double[] chances) {
        return chances[chances.length - 1];
    }
}
