package io.tallyward.service.explain;

import io.tallyward.engine.count.Outcome;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.Variant;
import io.tallyward.engine.record.DecisionRecord;
import io.tallyward.engine.record.Trust;
import java.util.stream.Collectors;

/** What the checks of the data say, in sentences. */
final class TrustWords {

    private TrustWords() {}

    static String of(Plan plan, DecisionRecord record) {
        if (record.trust() != Trust.SOUND) {
            return "The data were not trusted: " + reason(record)
                    + ". While that is so no verdict is told, whatever the rates look like.";
        }
        double events = Math.max(1, record.outcomes().total());
        return "The data were trusted: the traffic was split " + split(plan, record) + ", "
                + Numbers.shortPercent(record.outcomes().get(Outcome.LATE) / events)
                + " of the events came too late (up to "
                + Numbers.shortPercent(plan.trust().lateShare()) + " is tolerated), and "
                + Numbers.shortPercent(record.outcomes().get(Outcome.CROSSOVER) / events)
                + " came from units that had begun with another variant (up to "
                + Numbers.shortPercent(plan.trust().crossoverShare()) + ").";
    }

    /** Why, with a chance in place of a p-value. */
    static String reason(DecisionRecord record) {
        return record.trustReason()
                .replaceFirst(
                        " \\(sequential p-value [^)]*\\)",
                        ", which without a fault happens "
                                + Numbers.oneIn(record.split().sequentialPValue()));
    }

    private static String split(Plan plan, DecisionRecord record) {
        if (plan.epochCount() > 1) {
            return "as planned in each stretch of the run";
        }
        long all = plan.variants().stream()
                .mapToLong(variant -> VariantTotals.of(record, variant.name()).units())
                .sum();
        String found = plan.variants().stream()
                .map(variant ->
                        Numbers.percent(VariantTotals.of(record, variant.name()).units() / (double) Math.max(1, all)))
                .collect(Collectors.joining(" to "));
        String planned = plan.variants().stream()
                .map(Variant::share)
                .map(Numbers::shortPercent)
                .collect(Collectors.joining(" to "));
        return found + " (planned " + planned + ")";
    }
}
