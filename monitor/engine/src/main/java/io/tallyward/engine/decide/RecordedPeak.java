package io.tallyward.engine.decide;

import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.record.DecisionRecord.VariantCount;
import io.tallyward.engine.record.SplitPeak;
import java.util.List;

/** The counts at which a record says that the evidence against the split was largest, read as they were then. */
final class RecordedPeak {

    private static final String FIELD = "split.peak.units";

    private final Plan plan;
    private final SplitWatch watch;
    private final List<Objection> objections;

    RecordedPeak(Plan plan, SplitWatch watch, List<Objection> objections) {
        this.plan = plan;
        this.watch = watch;
        this.objections = objections;
    }

    /**
     * Lets the watch see the peak unless it knows it.
     *
     * @param peakOrNull what the record says
     * @param earlier counts of the record before
     * @param counts counts of the record
     */
    void read(SplitPeak peakOrNull, CumulativeCounts earlier, CumulativeCounts counts) {
        if (peakOrNull == null || peakOrNull.equals(watch.peak())) {
            return;
        }
        CumulativeCounts then;
        try {
            then = CumulativeCounts.of(
                    plan,
                    peakOrNull.units().stream()
                            .map(units -> new VariantCount(units.epoch(), units.variant(), units.units(), 0))
                            .toList());
        } catch (IllegalArgumentException e) {
            objections.add(new Objection(FIELD, "impossible counts", e.getMessage()));
            return;
        }
        for (int epoch = 0; epoch < counts.epochs(); epoch++) {
            for (int variant = 0; variant < plan.variants().size(); variant++) {
                long units = then.unitsIn(epoch)[variant];
                long least = earlier.unitsIn(epoch)[variant];
                long most = counts.unitsIn(epoch)[variant];
                if (!(units >= least && units <= most)) {
                    objections.add(new Objection(FIELD, String.valueOf(units), least + " to " + most));
                    return;
                }
            }
        }
        watch.observe(then);
    }
}
