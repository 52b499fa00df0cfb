package io.tallyward.service.command;

import io.tallyward.service.config.document.ScalarType;
import java.util.ArrayList;
import java.util.Comparator;
import java.util.List;
import java.util.Locale;

/**
 * What all comparisons of a plan together need: with unequal shares one of them takes the most trials to be complete, and
 * the plan takes as many as that one.
 */
final class OverallNeed {

    private final List<PlannedComparison> planned;
    private final PlannedComparison most;

    /** @param planned the comparisons of a plan, at least one */
    OverallNeed(List<PlannedComparison> planned) {
        this.planned = planned;
        most = planned.stream()
                .max(Comparator.comparingLong(PlannedComparison::plannedTrials))
                .orElseThrow();
    }

    /** Planned trials of all variants. */
    long trials() {
        return most.plannedTrials();
    }

    /** Trials of all variants that have to come in each day. */
    double perDay() {
        return most.trialsPerDay();
    }

    /** Whether the comparisons need different numbers of trials. */
    boolean differs() {
        return planned.stream().anyMatch(comparison -> comparison.plannedTrials() != trials());
    }

    /** The need in words, and who is complete before it is met. */
    String sentence() {
        List<String> earlier = new ArrayList<>();
        for (PlannedComparison comparison : planned) {
            if (comparison.plannedTrials() != trials()) {
                earlier.add(String.format(
                        Locale.ROOT, "%s after %,d", comparison.challenger().name(), comparison.plannedTrials()));
            }
        }
        return String.format(
                Locale.ROOT,
                "The plan needs %,d trials of all variants, %,.0f a day to have them within %s, until the last"
                        + " comparison (%s) is complete. Complete earlier: %s. Each section below takes it that traffic"
                        + " comes at the pace of its own comparison; with that of the plan its looks have more"
                        + " information than is shown.",
                trials(),
                Math.ceil(perDay()),
                ScalarType.written(most.plan().run().atMost()),
                most.challenger().name(),
                String.join(", ", earlier));
    }
}
