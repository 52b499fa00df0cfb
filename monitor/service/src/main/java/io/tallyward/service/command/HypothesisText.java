package io.tallyward.service.command;

import io.tallyward.engine.plan.PlanTerms;
import io.tallyward.engine.plan.Variant;
import io.tallyward.engine.record.DecisionRecord.Comparison;
import io.tallyward.service.command.Hypothesis.Course;
import io.tallyward.service.command.Hypothesis.Place;
import java.nio.file.Path;
import java.util.ArrayList;
import java.util.List;
import java.util.Locale;
import java.util.Optional;

/** Two plans over the same events, side by side. */
final class HypothesisText {

    private static final String NONE = "-";
    private static final String[] FIGURES = {"z", "upper z", "lower z", "alpha spent", "verdict"};

    private final Hypothesis hypothesis;
    private final Path file;

    HypothesisText(Hypothesis hypothesis, Path file) {
        this.hypothesis = hypothesis;
        this.file = file;
    }

    List<String> lines() {
        List<String> lines = new ArrayList<>();
        lines.add("HYPOTHETICAL, " + Hypothesis.REMARK + ".");
        lines.add(hypothesis.planned().plan().experiment() + " as planned, and as if " + file + " had been its plan:");
        lines.add("");
        List<PlanTerms.Difference> differences = hypothesis.differences();
        if (differences.isEmpty()) {
            lines.add("The plans do not differ.");
        } else {
            lines.addAll(terms(differences));
        }
        lines.add("");
        lines.addAll(endings());
        lines.add("");
        if (!hypothesis.looks().isEmpty()) {
            lines.addAll(looks());
            lines.add("");
        }
        lines.addAll(BoundariesText.wrapped(
                "Error rates hold for a plan that was fixed before the first event. Whoever chooses among plans after the fact"
                        + " has none: do not act on the right-hand side.",
                0));
        lines.add("");
        return lines;
    }

    private static List<String> terms(List<PlanTerms.Difference> differences) {
        Table table = new Table("term", "planned", "as if");
        differences.forEach(term -> table.row(term.key(), shown(term.frozen()), shown(term.proposed())));
        return table.lines();
    }

    private static String shown(String term) {
        return term.isEmpty() ? NONE : term;
    }

    private List<String> endings() {
        Table table = new Table("what came of it", "planned", "as if");
        for (String variant : hypothesis.challengers()) {
            table.row(variant, ending(hypothesis.planned(), variant), ending(hypothesis.asIf(), variant));
        }
        table.row("data", data(hypothesis.planned()), data(hypothesis.asIf()));
        return table.lines();
    }

    private static String ending(Course course, String variant) {
        if (course.plan().challengers().stream().map(Variant::name).noneMatch(variant::equals)) {
            return "no challenger";
        }
        Optional<Place> ending = course.ending(variant);
        if (ending.isEmpty()) {
            return course.view().map(view -> view.verdict().code()).orElse("no events");
        }
        Comparison look = course.look(ending.get()).orElseThrow();
        return verdict(look) + " at look " + look.look() + ", " + ending.get().windowEnd();
    }

    private static String data(Course course) {
        return course.view().map(view -> view.trust().code()).orElse(NONE);
    }

    private List<String> looks() {
        List<String> header = new ArrayList<>(List.of("look at", "variant"));
        header.addAll(List.of(FIGURES));
        header.addAll(List.of(FIGURES));
        Table table = new Table(header.toArray(String[]::new))
                .group("", 1)
                .group("planned", FIGURES.length)
                .group("as if", FIGURES.length);
        for (Place place : hypothesis.looks()) {
            List<String> row = new ArrayList<>(List.of(place.windowEnd().toString(), place.variant()));
            row.addAll(figures(hypothesis.planned().look(place)));
            row.addAll(figures(hypothesis.asIf().look(place)));
            table.row(row.toArray(String[]::new));
        }
        return table.lines();
    }

    private static List<String> figures(Optional<Comparison> found) {
        return found.map(look -> List.of(
                        decimals(look.z()),
                        decimals(look.upper()),
                        decimals(look.lower()),
                        String.format(Locale.ROOT, "%.5f", look.alphaSpent()),
                        verdict(look)))
                .orElse(List.of(NONE, NONE, NONE, NONE, NONE));
    }

    private static String verdict(Comparison look) {
        return Hypothesis.verdict(look).code() + (look.held() == null ? "" : " (held)");
    }

    private static String decimals(Double value) {
        return value == null ? NONE : String.format(Locale.ROOT, "%.4f", value);
    }
}
