package io.tallyward.service.command;

import io.tallyward.engine.plan.Plan;
import io.tallyward.service.command.PlannedComparison.FirstCell;
import io.tallyward.service.config.document.ScalarType;
import io.tallyward.service.plan.PlanWords;
import java.util.ArrayList;
import java.util.List;
import java.util.Locale;

/** What somebody should know before a plan is run: where it promises less than it seems to. */
final class BoundariesRemarks {

    /** How much power futility may cost before it is said. */
    private static final double POWER_LOSS = 0.005;

    private BoundariesRemarks() {}

    /** @param planned the comparisons of a plan, at least one */
    static List<String> of(List<PlannedComparison> planned) {
        List<String> remarks = new ArrayList<>();
        for (PlannedComparison comparison : planned) {
            comparison.firstLook().forEach((name, cell) -> {
                String remark = few(name, cell, comparison.plan().test().minimumPerCell());
                if (cell.few() && !remarks.contains(remark)) {
                    remarks.add(remark);
                }
            });
            waiting(comparison, remarks);
            futility(comparison, remarks);
        }
        plan(planned.get(0).plan(), remarks);
        return remarks;
    }

    private static void plan(Plan plan, List<String> remarks) {
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

    private static String few(String name, FirstCell cell, int minimum) {
        return String.format(
                Locale.ROOT,
                "At the first look %s is expected to have %.1f successes and %,.1f failures; below %.0f of either the"
                        + " normal approximation is rough there. A look waits for %d of each (test.minimum-per-cell).",
                name,
                cell.successes(),
                cell.failures(),
                PlannedComparison.FEW,
                minimum);
    }

    private static void waiting(PlannedComparison comparison, List<String> remarks) {
        int waiting = comparison.design().looksExpectedToWait(comparison.plan(), comparison.challenger());
        if (waiting > 0) {
            remarks.add(String.format(
                    Locale.ROOT,
                    "%s: %d of the %d looks are expected to wait for more successes; few of them in arms of unequal size"
                            + " would distort the error. More even shares would help.",
                    comparison.challenger().name(),
                    waiting,
                    comparison.design().looks().size()));
        }
    }

    private static void futility(PlannedComparison comparison, List<String> remarks) {
        double power = comparison.underSmallestEffect().obeyed().power();
        double planned = comparison.plan().test().power();
        if (power < planned - POWER_LOSS) {
            remarks.add(String.format(
                    Locale.ROOT,
                    "%s: with futility obeyed the power is %.3f instead of the planned %s; a lower threshold costs less.",
                    comparison.challenger().name(),
                    power,
                    PlanWords.shortest(planned)));
        }
    }
}
