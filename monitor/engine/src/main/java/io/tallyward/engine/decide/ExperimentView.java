package io.tallyward.engine.decide;

import io.tallyward.engine.count.OutcomeCounts;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.record.DecisionRecord.Comparison;
import io.tallyward.engine.record.DecisionRecord.Split;
import io.tallyward.engine.record.DecisionRecord.VariantCount;
import io.tallyward.engine.record.Trust;
import io.tallyward.engine.record.Verdict;
import java.time.Instant;
import java.util.List;
import java.util.Map;
import java.util.Optional;

/**
 * Where an experiment stands, for dashboards and pages: an immutable snapshot.
 *
 * @param plan the plan in force
 * @param planDigest its digest
 * @param completeUntil end of the last complete window; empty before the first
 * @param counts cumulative counts by allocation epoch and variant
 * @param outcomes cumulative outcomes of the events of complete windows
 * @param split what the split checks say
 * @param trust whether the data are trusted
 * @param trustReason why not, in words; empty while sound
 * @param verdict the verdict on the experiment
 * @param comparisons the latest look at each challenger, by variant in the plan's order; absent before its first look
 * @param verdicts verdict of every challenger, by variant in the plan's order
 * @param held the verdict that waits for trust, by variant; only challengers that have one
 * @param history past looks in order, the oldest dropped beyond a bound
 * @param looksTaken how many look events there have been
 * @param looksDelayed how many due looks had to wait
 * @param delayReason why the last one had to wait; empty when none did
 * @param maximumInformation planned maximum information of each challenger, by variant
 * @param lastRecord digest of the newest decision record
 */
public record ExperimentView(
        Plan plan,
        String planDigest,
        Optional<Instant> completeUntil,
        List<VariantCount> counts,
        OutcomeCounts outcomes,
        Split split,
        Trust trust,
        String trustReason,
        Verdict verdict,
        Map<String, Comparison> comparisons,
        Map<String, Verdict> verdicts,
        Map<String, Verdict> held,
        List<LookPoint> history,
        int looksTaken,
        int looksDelayed,
        String delayReason,
        Map<String, Double> maximumInformation,
        String lastRecord) {

    /** One look of the past: when it was taken and what it saw. */
    public record LookPoint(Instant windowEnd, Comparison comparison) {}
}
