package io.tallyward.engine.decide;

import io.tallyward.engine.count.OutcomeCounts;
import io.tallyward.engine.decide.ExperimentView.LookPoint;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.record.DecisionRecord.Comparison;
import io.tallyward.engine.record.DecisionRecord.Split;
import io.tallyward.engine.record.DecisionRecord.VariantCount;
import io.tallyward.engine.record.Verdict;
import java.time.Instant;
import java.util.ArrayList;
import java.util.Comparator;
import java.util.LinkedHashMap;
import java.util.List;
import java.util.Map;
import java.util.Optional;

/** Takes the snapshot of an experiment that pages and dashboards see. */
final class ViewWriter {

    /** Looks kept for the page; older ones stay in the decision log. */
    private static final int HISTORY = 500;

    private ViewWriter() {}

    /** How looking has gone. */
    record Looks(int taken, int delayed, String delayReason) {}

    static ExperimentView view(
            Plan plan,
            String planDigest,
            Optional<Instant> completeUntil,
            List<VariantCount> counts,
            OutcomeCounts outcomes,
            Split split,
            TrustWatch.Judgement judgement,
            Verdict verdict,
            List<ChallengerTest> tests,
            Looks looks,
            String lastRecord) {
        Map<String, Comparison> comparisons = new LinkedHashMap<>();
        Map<String, Verdict> verdicts = new LinkedHashMap<>();
        Map<String, Verdict> held = new LinkedHashMap<>();
        Map<String, Double> maximumInformation = new LinkedHashMap<>();
        for (ChallengerTest test : tests) {
            test.lastLook()
                    .ifPresent(look -> comparisons.put(
                            test.name(),
                            look.comparison()
                                    .standing(test.verdict(), test.held().orElse(null))));
            verdicts.put(test.name(), test.verdict());
            test.held().ifPresent(verdictHeld -> held.put(test.name(), verdictHeld));
            maximumInformation.put(test.name(), test.design().maximumInformation());
        }
        return new ExperimentView(
                plan,
                planDigest,
                completeUntil,
                counts,
                outcomes,
                split,
                judgement.trust(),
                judgement.reason(),
                verdict,
                comparisons,
                verdicts,
                held,
                history(tests),
                looks.taken(),
                looks.delayed(),
                looks.delayReason(),
                maximumInformation,
                lastRecord);
    }

    private static List<LookPoint> history(List<ChallengerTest> tests) {
        List<LookPoint> points = new ArrayList<>();
        for (ChallengerTest test : tests) {
            test.looks().forEach(look -> points.add(new LookPoint(look.windowEnd(), look.comparison())));
        }
        points.sort(Comparator.comparing(LookPoint::windowEnd));
        return points.size() <= HISTORY ? points : points.subList(points.size() - HISTORY, points.size());
    }
}
