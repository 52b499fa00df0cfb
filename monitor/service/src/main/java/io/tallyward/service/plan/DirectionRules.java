package io.tallyward.service.plan;

import io.tallyward.engine.plan.Tail;
import io.tallyward.engine.plan.TestPlan.Sides;
import io.tallyward.service.config.document.Key;
import io.tallyward.service.config.document.Values;
import java.util.Optional;

/** How the level is divided between the directions, and what each has of its own. */
final class DirectionRules {

    /** Decimals that add up on paper do so in binary but for rounding. */
    private static final double ROUNDING = 1e-12;

    private DirectionRules() {}

    /** Refuses directions that do not fit the test. */
    static void check(Values test) {
        Optional<Double> alpha = test.find(PlanKeys.Test.ALPHA);
        if (test.find(PlanKeys.Test.SIDES).filter(Sides.ONE::equals).isPresent()) {
            checkOneSided(test);
            return;
        }
        Optional<Double> benefit = ownAlpha(test, PlanKeys.Test.BENEFIT);
        Optional<Double> harm = ownAlpha(test, PlanKeys.Test.HARM);
        if (alpha.isEmpty() || (benefit.isEmpty() && harm.isEmpty())) {
            return;
        }
        if (benefit.isPresent() && harm.isPresent()) {
            double sum = benefit.get() + harm.get();
            if (!(Math.abs(sum - alpha.get()) <= ROUNDING)) {
                test.refuse(
                        PlanKeys.Test.ALPHA,
                        "benefit.alpha + harm.alpha = " + PlanWords.shortest(sum),
                        "both to add up to test.alpha, " + PlanWords.shortest(alpha.get()));
            }
            return;
        }
        Key<Values> given = benefit.isPresent() ? PlanKeys.Test.BENEFIT : PlanKeys.Test.HARM;
        double own = benefit.or(() -> harm).orElseThrow();
        if (!(own < alpha.get())) {
            test.find(given)
                    .ifPresent(direction -> direction.refuse(
                            PlanKeys.Direction.ALPHA,
                            String.valueOf(own),
                            "less than test.alpha, " + alpha.get() + ", so that the other direction has some left"));
        }
    }

    private static void checkOneSided(Values test) {
        if (test.gives(PlanKeys.Test.HARM)) {
            test.refuse(PlanKeys.Test.HARM, "a direction", "nothing: with sides: one only a benefit is tested");
        }
        test.find(PlanKeys.Test.BENEFIT)
                .filter(benefit -> benefit.gives(PlanKeys.Direction.ALPHA))
                .ifPresent(benefit -> benefit.refuse(
                        PlanKeys.Direction.ALPHA, "a level", "nothing: with sides: one it has all of test.alpha"));
    }

    private static Optional<Double> ownAlpha(Values test, Key<Values> direction) {
        return test.find(direction).flatMap(values -> values.find(PlanKeys.Direction.ALPHA));
    }

    /** A direction of a test that was checked. */
    static Tail tail(Values test, Key<Values> direction) {
        Optional<Values> own = test.find(direction);
        return new Tail(
                level(test, direction),
                own.flatMap(values -> values.find(PlanKeys.Direction.SPENDING))
                        .orElseGet(() -> test.get(PlanKeys.Test.SPENDING)),
                own.flatMap(values -> values.find(PlanKeys.Direction.SILENT_BEFORE))
                        .orElse(0.0));
    }

    private static double level(Values test, Key<Values> direction) {
        double alpha = test.get(PlanKeys.Test.ALPHA);
        if (test.get(PlanKeys.Test.SIDES) == Sides.ONE) {
            return alpha;
        }
        Key<Values> other = direction == PlanKeys.Test.BENEFIT ? PlanKeys.Test.HARM : PlanKeys.Test.BENEFIT;
        return ownAlpha(test, direction)
                .or(() -> ownAlpha(test, other).map(others -> alpha - others))
                .orElse(alpha / 2);
    }
}
