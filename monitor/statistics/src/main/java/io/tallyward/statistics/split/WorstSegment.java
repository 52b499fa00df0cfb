package io.tallyward.statistics.split;

import io.tallyward.statistics.multiplicity.AdjustedProbability;
import java.util.ArrayList;
import java.util.List;
import java.util.Map;
import java.util.Optional;
import java.util.TreeMap;

/**
 * The segment whose split is furthest from the plan: Pearson's chi-square per segment, with p-values adjusted for the
 * number of segments by Holm's procedure (1979), so that looking at many does not make one of them look odd. Valid for a
 * single reading.
 *
 * <p>Segments in which some cell expects fewer than {@value #LEAST_EXPECTED} are left out, as the chi-square law does not
 * hold there (common practice, after Cochran 1954); they do not count for the adjustment either.
 *
 * @param segment name of the segment with the largest chi-square; the first by name of several
 * @param split its comparison with the plan
 * @param adjustedPValue probability of so large a chi-square in any of the segments judged, at most; in [0, 1]
 * @param judged number of segments judged
 */
public record WorstSegment(String segment, PearsonSplit split, double adjustedPValue, int judged) {

    /** Smallest expected count of a cell in a segment that is judged. */
    public static final int LEAST_EXPECTED = 5;

    public WorstSegment {
        if (!(adjustedPValue >= 0 && adjustedPValue <= 1)) {
            throw new IllegalArgumentException("adjustedPValue: " + adjustedPValue + " (expected: in [0, 1])");
        }
        if (judged < 1) {
            throw new IllegalArgumentException("judged: " + judged + " (expected: 1 or more)");
        }
    }

    /**
     * Looks for it.
     *
     * @param shares planned shares, positive, in any unit; the same in every segment
     * @param segments counts by cell of each segment
     * @return empty if no segment has enough counts
     */
    public static Optional<WorstSegment> of(double[] shares, Map<String, long[]> segments) {
        double[] planned = Shares.normalised(shares);
        List<String> names = new ArrayList<>();
        List<PearsonSplit> splits = new ArrayList<>();
        int worst = 0;
        for (Map.Entry<String, long[]> segment : new TreeMap<>(segments).entrySet()) {
            PearsonSplit split = PearsonSplit.of(shares, segment.getValue());
            if (!isEnough(planned, segment.getValue())) {
                continue;
            }
            names.add(segment.getKey());
            splits.add(split);
            if (split.chiSquare() > splits.get(worst).chiSquare()) {
                worst = splits.size() - 1;
            }
        }
        if (names.isEmpty()) {
            return Optional.empty();
        }
        double[] adjusted = AdjustedProbability.HOLM.of(
                splits.stream().mapToDouble(PearsonSplit::pValue).toArray());
        return Optional.of(new WorstSegment(names.get(worst), splits.get(worst), adjusted[worst], names.size()));
    }

    private static boolean isEnough(double[] planned, long[] counts) {
        double total = Shares.total(counts);
        for (double share : planned) {
            if (share * total < LEAST_EXPECTED) {
                return false;
            }
        }
        return true;
    }
}
