package io.tallyward.engine.record;

import java.time.Instant;
import java.util.List;

/**
 * Where a mismatch of the split comes from, as far as counts can tell. It says where to look; whether there is a mismatch is
 * not decided by it.
 *
 * @param epoch the allocation epoch it was found in
 * @param beganFrom start of the windows in which it began: from there on shares other than the planned ones explain the
 *     counts best
 * @param beganUntil their end; a window after {@code beganFrom}, or more in a long run, whose windows are kept together
 * @param logLikelihoodGain by how much they do, natural logarithm, 0 or more
 * @param since units of each variant that is still compared, first exposed from {@code beganFrom} on
 * @param worst the segment that is furthest off the plan; null when the plan names no segments or no segment has enough units
 */
public record SplitOrigin(
        int epoch,
        Instant beganFrom,
        Instant beganUntil,
        double logLikelihoodGain,
        List<PlannedUnits> since,
        SegmentSplit worst) {

    public SplitOrigin {
        since = List.copyOf(since);
    }

    /**
     * Units of one variant against the plan.
     *
     * @param planned share of the variant among those compared, in (0, 1)
     * @param units what was counted, 0 or more
     */
    public record PlannedUnits(String variant, double planned, long units) {}

    /**
     * The split within one segment over the whole allocation epoch.
     *
     * @param field name of the segment field, as in {@code platform}
     * @param value its value
     * @param units units of each variant that is still compared
     * @param elsewhere units of the same variants, in the same order, with other values of the field
     * @param chiSquare Pearson's statistic of {@code units} against the planned shares
     * @param adjustedPValue its p-value, adjusted for the number of segments judged; in [0, 1]
     * @param contrastPValue p-value of Pearson's statistic of {@code units} against {@code elsewhere}, adjusted likewise; in [0,
     *     1]
     * @param judged number of segments judged
     * @param standsOut whether both p-values are at or below the level of the split check: the segment contradicts the plan,
     *     and not just because all do
     */
    public record SegmentSplit(
            String field,
            String value,
            List<PlannedUnits> units,
            List<PlannedUnits> elsewhere,
            double chiSquare,
            double adjustedPValue,
            double contrastPValue,
            int judged,
            boolean standsOut) {

        public SegmentSplit {
            units = List.copyOf(units);
            elsewhere = List.copyOf(elsewhere);
        }
    }
}
