package io.tallyward.service.command;

import io.tallyward.engine.decide.PlanDesign;
import io.tallyward.engine.plan.LookSchedule;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.TestPlan.Better;
import io.tallyward.engine.plan.TestPlan.Sides;
import io.tallyward.engine.plan.Variant;
import io.tallyward.service.config.document.ScalarType;
import io.tallyward.statistics.boundary.Look;
import java.util.ArrayList;
import java.util.List;
import java.util.Locale;
import java.util.Map;

/** The design of a plan in words and tables. */
final class BoundariesText {

    private static final String NONE = "-";

    private final Plan plan;

    BoundariesText(Plan plan) {
        this.plan = plan;
    }

    List<String> lines(Map<Variant, PlanDesign> designs) {
        List<String> lines = new ArrayList<>();
        lines.add(plan.experiment() + ": " + plan.question());
        designs.forEach((challenger, design) -> {
            lines.add("");
            lines.addAll(comparison(challenger, design));
        });
        lines.add("");
        lines.addAll(legend());
        return lines;
    }

    private List<String> comparison(Variant challenger, PlanDesign design) {
        List<String> lines = new ArrayList<>();
        lines.add(challenger.name() + " against " + plan.control().name() + ": level " + shortest(design.alpha()) + ", "
                + BoundariesCommand.sides(plan.test().sides()) + "-sided, spending "
                + plan.test().benefit().spending().code() + ", power "
                + shortest(plan.test().power()) + " for "
                + shortest(plan.test().baseline()) + " -> " + shortest(rateUnderEffect()));
        PlannedPath path = new PlannedPath(plan, design);
        lines.addAll(looks(design, path).lines());
        StringBuilder trials = new StringBuilder("planned trials:");
        design.trials()
                .forEach((variant, count) ->
                        trials.append(' ').append(variant).append(' ').append(count));
        lines.add(trials.append(", ")
                .append(decimals(design.inflation(), 4))
                .append(" times those of a single look")
                .toString());
        lines.add("expected looks: " + decimals(path.expectedLooksWithoutEffect(), 1) + " without an effect, "
                + decimals(path.expectedLooks(), 1) + " with the smallest effect, of "
                + design.looks().size() + (plan.futility().isPresent() ? ", futility obeyed" : ""));
        return lines;
    }

    private Table looks(PlanDesign design, PlannedPath path) {
        Table table = new Table(cells("futility z", "look", "information", "alpha spent", "upper z", "lower z"));
        for (Look look : design.looks()) {
            table.row(cells(
                    boundary(path.futility(look.number() - 1)),
                    String.valueOf(look.number()),
                    decimals(look.information(), 4),
                    decimals(look.upperSpent() + look.lowerSpent(), 6),
                    boundary(look.upper()),
                    boundary(look.lower())));
        }
        return table;
    }

    /** The cells of a row, and the one about futility at its end if the plan has futility. */
    private String[] cells(String futility, String... others) {
        List<String> cells = new ArrayList<>(List.of(others));
        if (plan.futility().isPresent()) {
            cells.add(futility);
        }
        return cells.toArray(String[]::new);
    }

    private List<String> legend() {
        List<String> lines = new ArrayList<>(List.of(
                "look         number of the look" + schedule(),
                "information  share of the planned information that is in at that look",
                "alpha spent  chance of a false alarm up to and including that look, "
                        + (plan.test().sides() == Sides.TWO
                                ? "both directions together"
                                : "in the direction of benefit"),
                "upper z      stop when the z-value of variant minus control is at or above it",
                "lower z      stop when it is at or below it; " + NONE + " means no stop in that direction"));
        if (plan.futility().isPresent()) {
            lines.add("futility z   a benefit has become unlikely when it is "
                    + (plan.test().better() == Better.HIGHER ? "below" : "above")
                    + " it: advice to stop, not an obligation; none at the last look");
        }
        if (!plan.run().atLeast().isZero()) {
            lines.add("No benefit is declared in the first "
                    + ScalarType.written(plan.run().atLeast()) + ".");
        }
        lines.add(
                "Looks may come at other moments than planned: the boundaries then follow the information that is in.");
        return lines;
    }

    private String schedule() {
        return plan.looks() instanceof LookSchedule.Every every
                ? ", one every " + ScalarType.written(every.interval())
                : "";
    }

    private double rateUnderEffect() {
        double effect = plan.test().smallestEffect();
        return plan.test().baseline() + (plan.test().better() == Better.HIGHER ? effect : -effect);
    }

    private static String boundary(double z) {
        return Double.isFinite(z) ? decimals(z, 4) : NONE;
    }

    private static String decimals(double value, int places) {
        return String.format(Locale.ROOT, "%." + places + "f", value);
    }

    /** A figure of the plan without the noise of binary arithmetic. */
    private static String shortest(double value) {
        return String.valueOf(Math.round(value * 1e9) / 1e9);
    }
}
