package io.tallyward.service.command;

import io.tallyward.engine.decide.ExperimentView;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.PlanTerms;
import io.tallyward.engine.plan.Variant;
import io.tallyward.engine.record.DecisionRecord;
import io.tallyward.engine.record.DecisionRecord.Comparison;
import io.tallyward.engine.record.Verdict;
import io.tallyward.service.config.document.BadInputException;
import io.tallyward.service.config.document.Problem;
import java.nio.file.Path;
import java.time.Instant;
import java.util.Comparator;
import java.util.HashSet;
import java.util.LinkedHashSet;
import java.util.List;
import java.util.Optional;
import java.util.Set;
import java.util.TreeSet;

/**
 * What an input would have led to under another plan of an experiment, beside what it leads to under its own. It is found after
 * the fact, by someone who may have seen the data, and so is no decision: the error rates of a plan hold for the plan that was
 * fixed before.
 *
 * @param planned the course under the experiment's own plan
 * @param asIf the course under the other one
 */
record Hypothesis(Course planned, Course asIf) {

    /** How it has to be called wherever it is shown. */
    static final String REMARK = "decided after the fact; not a decision";

    /**
     * How an experiment goes under one plan.
     *
     * @param plan the plan
     * @param records the records, in their order
     * @param view where it stands at the end; empty without events
     */
    record Course(Plan plan, List<DecisionRecord> records, Optional<ExperimentView> view) {

        static Course of(Replay replay, String experiment) {
            return new Course(
                    replay.plans().get(experiment),
                    replay.decisions().stream()
                            .filter(decision -> decision.experiment().equals(experiment))
                            .toList(),
                    Optional.ofNullable(replay.views().get(experiment)));
        }

        /** The look at a challenger that was taken at a moment. */
        Optional<Comparison> look(Place place) {
            return records.stream()
                    .filter(decision -> decision.windowEnd().equals(place.windowEnd()))
                    .flatMap(decision -> decision.comparisons().stream())
                    .filter(comparison -> comparison.variant().equals(place.variant()))
                    .findFirst();
        }

        private List<Place> places() {
            return records.stream()
                    .flatMap(decision -> decision.comparisons().stream()
                            .map(comparison -> new Place(decision.windowEnd(), comparison.variant())))
                    .toList();
        }

        /** The look that a comparison ended with, told or held. */
        Optional<Place> ending(String variant) {
            return places().stream()
                    .filter(place -> place.variant().equals(variant))
                    .filter(place -> verdict(look(place).orElseThrow()).settled())
                    .findFirst();
        }
    }

    /**
     * Where a look is shown.
     *
     * @param windowEnd end of the data
     * @param variant the challenger
     */
    record Place(Instant windowEnd, String variant) {}

    static Hypothesis of(Replay planned, Replay asIf) {
        String experiment = asIf.plans().firstKey();
        return new Hypothesis(Course.of(planned, experiment), Course.of(asIf, experiment));
    }

    /** The other plan, if it is one for an experiment that is planned, and for variants that have events. */
    static Plan plan(Path file, Plan other, List<Plan> plans) throws BadInputException {
        Plan own = plans.stream()
                .filter(plan -> plan.experiment().equals(other.experiment()))
                .findFirst()
                .orElseThrow(() -> refused(
                        file,
                        "experiment",
                        other.experiment(),
                        "one of "
                                + new TreeSet<>(
                                        plans.stream().map(Plan::experiment).toList())));
        Set<String> known =
                new HashSet<>(own.variants().stream().map(Variant::name).toList());
        for (Variant variant : other.variants()) {
            if (!known.contains(variant.name())) {
                throw refused(file, "variants", variant.name(), "variants of the plan it is compared with, " + known);
            }
        }
        return other;
    }

    private static BadInputException refused(Path file, String key, String found, String expected) {
        return new BadInputException(List.of(new Problem(file.toString(), 0, key, found, expected, "")));
    }

    /** What the data said at a look, whether it was told or held. */
    static Verdict verdict(Comparison look) {
        return look.held() == null ? look.verdict() : look.held();
    }

    /** The terms in which the plans differ. */
    List<PlanTerms.Difference> differences() {
        return PlanTerms.differences(planned.plan(), asIf.plan());
    }

    /** Every look that was taken under either plan, in the order of time. */
    List<Place> looks() {
        Set<Place> places = new LinkedHashSet<>(planned.places());
        places.addAll(asIf.places());
        List<String> order = challengers();
        return places.stream()
                .sorted(Comparator.comparing(Place::windowEnd).thenComparing(place -> order.indexOf(place.variant())))
                .toList();
    }

    /** Every variant that is a challenger under either plan. */
    List<String> challengers() {
        Set<String> names = new LinkedHashSet<>();
        planned.plan().challengers().forEach(variant -> names.add(variant.name()));
        asIf.plan().challengers().forEach(variant -> names.add(variant.name()));
        return List.copyOf(names);
    }
}
