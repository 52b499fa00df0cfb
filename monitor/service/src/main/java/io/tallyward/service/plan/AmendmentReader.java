package io.tallyward.service.plan;

import io.tallyward.engine.plan.Amendment;
import io.tallyward.engine.plan.AmendmentRules;
import io.tallyward.engine.plan.Plan;
import io.tallyward.service.config.document.Values;
import java.util.List;
import java.util.stream.Stream;

/** Reads the amendments of a plan file. */
final class AmendmentReader {

    private AmendmentReader() {}

    /** Refuses an amendment that does not change exactly one thing. */
    static void checkChanges(List<Values> amendments) {
        for (Values amendment : amendments) {
            long changes = Stream.of(PlanKeys.Amended.END, PlanKeys.Amended.SHARES, PlanKeys.Amended.STOP)
                    .filter(amendment::gives)
                    .count();
            if (changes != 1) {
                amendment.refuse(changes == 0 ? "no change" : changes + " changes", "one of end, shares and stop");
            }
            amendment
                    .find(PlanKeys.Amended.STOP)
                    .filter(stop -> !stop)
                    .ifPresent(stop -> amendment.refuse(
                            PlanKeys.Amended.STOP, "false", "true, or nothing: a stop is not taken back"));
        }
    }

    static List<Amendment> amendments(Values plan) {
        return plan.find(PlanKeys.AMENDMENTS).orElse(List.of()).stream()
                .map(AmendmentReader::amendment)
                .toList();
    }

    private static Amendment amendment(Values values) {
        Amendment.Change change = values.find(PlanKeys.Amended.END)
                .<Amendment.Change>map(Amendment.End::new)
                .or(() -> values.find(PlanKeys.Amended.SHARES).map(Amendment.Shares::new))
                .orElseGet(Amendment.Stop::new);
        return new Amendment(values.get(PlanKeys.Amended.AT), values.get(PlanKeys.Amended.REASON), change);
    }

    /** Refuses the first amendment that breaks a rule. */
    static void check(Plan plan, Values values) {
        AmendmentRules.problem(plan).ifPresent(problem -> {
            List<Values> amendments = values.get(PlanKeys.AMENDMENTS);
            amendments
                    .get(Math.min(problem.index(), amendments.size() - 1))
                    .refuse(problem.found(), problem.expected());
        });
    }
}
