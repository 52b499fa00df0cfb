package io.tallyward.service.command;

import io.tallyward.engine.decide.PlanDesign;
import io.tallyward.engine.plan.LookSchedule;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.TestPlan.Better;
import io.tallyward.engine.plan.Variant;
import io.tallyward.service.config.document.ScalarType;
import io.tallyward.statistics.boundary.ExitProbabilities;
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
                + plan.test().spending().code() + ", power "
                + shortest(plan.test().power()) + " for "
                + shortest(plan.test().baseline()) + " -> " + shortest(rateUnderEffect()));
        Table table = new Table("look", "information", "alpha spent", "upper z", "lower z");
        for (Look look : design.looks()) {
            table.row(
                    String.valueOf(look.number()),
                    decimals(look.information(), 4),
                    decimals(look.upperSpent() + look.lowerSpent(), 6),
                    boundary(look.upper()),
                    boundary(look.lower()));
        }
        lines.addAll(table.lines());
        StringBuilder trials = new StringBuilder("planned trials:");
        design.trials()
                .forEach((variant, count) ->
                        trials.append(' ').append(variant).append(' ').append(count));
        lines.add(trials.append(", ")
                .append(decimals(design.inflation(), 4))
                .append(" times those of a single look")
                .toString());
        lines.add("expected looks: " + decimals(expectedLooks(design, 0), 1) + " without an effect, "
                + decimals(expectedLooks(design, signedDrift(design)), 1) + " with the smallest effect, of "
                + design.looks().size() + (plan.futility().isPresent() ? ", futility ignored" : ""));
        return lines;
    }

    private List<String> legend() {
        List<String> lines = new ArrayList<>(List.of(
                "look         number of the look" + schedule(),
                "information  share of the planned information that is in at that look",
                "alpha spent  chance of a false alarm up to and including that look, both directions together",
                "upper z      stop when the z-value of variant minus control is at or above it",
                "lower z      stop when it is at or below it; " + NONE + " means no stop in that direction"));
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

    private double signedDrift(PlanDesign design) {
        return plan.test().better() == Better.HIGHER ? design.drift() : -design.drift();
    }

    /** Mean number of looks until a boundary is crossed or the last look is taken. */
    private static double expectedLooks(PlanDesign design, double drift) {
        ExitProbabilities exits = ExitProbabilities.of(
                design.looks().stream().mapToDouble(Look::information).toArray(),
                design.looks().stream().mapToDouble(Look::upper).toArray(),
                design.looks().stream().mapToDouble(Look::lower).toArray(),
                drift);
        double[] upper = exits.upper();
        double[] lower = exits.lower();
        double expected = 0;
        double running = 1;
        for (int k = 0; k < upper.length; k++) {
            expected += running;
            running -= upper[k] + lower[k];
        }
        return expected;
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
