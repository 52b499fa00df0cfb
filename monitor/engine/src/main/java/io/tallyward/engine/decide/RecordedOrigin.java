package io.tallyward.engine.decide;

import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.record.DecisionRecord;
import io.tallyward.engine.record.SplitOrigin;
import io.tallyward.engine.record.SplitOrigin.PlannedUnits;
import io.tallyward.engine.record.SplitOrigin.SegmentSplit;
import io.tallyward.statistics.split.SplitChangePoint;
import java.time.Instant;
import java.util.ArrayList;
import java.util.Arrays;
import java.util.List;

/**
 * Where a mismatch comes from, computed again as far as a record's own figures allow: the window where it began and the
 * units since and by segment are taken from the record, and everything else from them.
 */
final class RecordedOrigin {

    private final Plan plan;
    private final SplitWatch watch;
    private final CumulativeCounts counts;
    private final DecisionRecord recorded;
    private final SplitOrigin origin;
    private final List<Objection> objections;

    RecordedOrigin(
            Plan plan, SplitWatch watch, CumulativeCounts counts, DecisionRecord recorded, List<Objection> objections) {
        this.plan = plan;
        this.watch = watch;
        this.counts = counts;
        this.recorded = recorded;
        this.origin = recorded.split().origin();
        this.objections = objections;
    }

    /** The origin, or null when the record has none that could be judged; why not is among the objections then. */
    SplitOrigin again() {
        if (origin == null) {
            objections.add(new Objection("split.origin", "null", "where the mismatch began"));
            return null;
        }
        if (!(origin.epoch() >= 0 && origin.epoch() < counts.epochs())) {
            objections.add(new Objection(
                    "split.origin.epoch", String.valueOf(origin.epoch()), "less than " + counts.epochs()));
            return null;
        }
        if (!placed(origin.since(), "split.origin.since")) {
            return null;
        }
        checkStretch();
        List<PlannedUnits> since = planned(origin.since());
        double gain = SplitChangePoint.of(watch.shares(origin.epoch()), List.of(SplitTrace.units(since)))
                .map(SplitChangePoint::logLikelihoodGain)
                .orElse(0.0);
        return new SplitOrigin(origin.epoch(), origin.beganFrom(), origin.beganUntil(), gain, since, worst());
    }

    private void checkStretch() {
        long window = plan.count().window().toMillis();
        long from = plan.run().from().toEpochMilli();
        Instant start = plan.run().from();
        for (Instant moment : List.of(origin.beganFrom(), origin.beganUntil())) {
            if (moment.isBefore(start) || (moment.toEpochMilli() - from) % window != 0) {
                objections.add(new Objection("split.origin.beganFrom", moment.toString(), "the edge of a window"));
            }
        }
        if (!origin.beganFrom().isBefore(origin.beganUntil())
                || !origin.beganFrom().isBefore(recorded.windowEnd())) {
            objections.add(new Objection(
                    "split.origin.beganFrom",
                    origin.beganFrom().toString(),
                    "before its end and before the end of the record's last window"));
        }
    }

    /** Whether there is a count for each variant that is watched, and none larger than what was counted in the epoch. */
    private boolean placed(List<PlannedUnits> units, String field) {
        long[] counted = counts.unitsIn(origin.epoch());
        int[] watched = watch.watched();
        boolean fits = units.size() == watched.length;
        for (int i = 0; fits && i < watched.length; i++) {
            fits = units.get(i).units() >= 0 && units.get(i).units() <= counted[watched[i]];
        }
        if (!fits) {
            objections.add(new Objection(
                    field,
                    units.stream().map(PlannedUnits::units).toList().toString(),
                    "for each of the " + watched.length + " variants compared at most what was counted"));
        }
        return fits;
    }

    private List<PlannedUnits> planned(List<PlannedUnits> units) {
        return SplitTrace.planned(plan, watch, origin.epoch(), SplitTrace.units(units));
    }

    private SegmentSplit worst() {
        SegmentSplit worst = origin.worst();
        boolean judged = worst != null && worst.judged() >= 1 && worst.judged() <= mostSegments();
        if (worst != null && !judged) {
            objections.add(new Objection(
                    "split.origin.worst.judged", String.valueOf(worst.judged()), "1 to " + mostSegments()));
        }
        if (!judged
                || !placed(worst.units(), "split.origin.worst.units")
                || !placed(together(worst), "split.origin.worst.elsewhere")) {
            return null;
        }
        if (!plan.splitCheck().segments().contains(worst.field())) {
            objections.add(new Objection(
                    "split.origin.worst.field",
                    worst.field(),
                    "one of " + String.join(", ", plan.splitCheck().segments())));
        }
        return SplitTrace.segment(
                plan, worst.field(), worst.value(), planned(worst.units()), planned(worst.elsewhere()), worst.judged());
    }

    private int mostSegments() {
        return plan.splitCheck().segments().size() * SegmentUnits.MOST_NAMES;
    }

    private static List<PlannedUnits> together(SegmentSplit segment) {
        List<PlannedUnits> sums = new ArrayList<>();
        long[] units = SplitTrace.units(segment.units());
        long[] elsewhere = Arrays.copyOf(SplitTrace.units(segment.elsewhere()), units.length);
        for (int i = 0; i < units.length; i++) {
            sums.add(new PlannedUnits("", 1, elsewhere[i] < 0 ? -1 : units[i] + elsewhere[i]));
        }
        return segment.elsewhere().size() == units.length ? sums : List.of();
    }
}
