package io.tallyward.service.rehearse;

import java.util.ArrayList;
import java.util.EnumMap;
import java.util.List;
import java.util.Map;
import java.util.Optional;
import java.util.TreeMap;

/** Sums over runs for one challenger. Not thread-safe. */
final class ArmStatistics {

    private static final Ending[] ENDINGS = Ending.values();

    /** Number of runs by look and ending. */
    private final TreeMap<Integer, long[]> stops = new TreeMap<>();

    private final Moments looks = new Moments();
    private final Moments levels = new Moments();
    private final Moments naiveError = new Moments();
    private final Moments adjustedError = new Moments();
    private final Counters<Count> counts = new Counters<>(Count.class);

    private enum Count {
        NAIVE_REJECTION,
        ESTIMATE,
        NAIVE_TOO_LOW,
        ADJUSTED_TOO_LOW,
        NAIVE_COVERS,
        REPEATED_COVERS,
        STAGEWISE_COVERS
    }

    void add(RunResult.Arm arm, double trueDifference) {
        at(arm.looks())[arm.ending().ordinal()]++;
        looks.add(arm.looks());
        counts.count(Count.NAIVE_REJECTION, arm.naiveRejection());
        arm.estimate().ifPresent(estimate -> add(estimate, trueDifference));
    }

    private long[] at(int look) {
        return stops.computeIfAbsent(look, key -> new long[ENDINGS.length]);
    }

    private void add(StopEstimate estimate, double trueDifference) {
        counts.count(Count.ESTIMATE, true);
        levels.add(estimate.level());
        naiveError.add(estimate.naive() - trueDifference);
        adjustedError.add(estimate.adjusted() - trueDifference);
        counts.count(Count.NAIVE_TOO_LOW, estimate.naive() < trueDifference);
        counts.count(Count.ADJUSTED_TOO_LOW, estimate.adjusted() < trueDifference);
        counts.count(Count.NAIVE_COVERS, estimate.naiveCovers());
        counts.count(Count.REPEATED_COVERS, estimate.repeatedCovers());
        counts.count(Count.STAGEWISE_COVERS, estimate.stagewiseCovers());
    }

    void add(ArmStatistics later) {
        later.stops.forEach((look, runs) -> {
            long[] sums = at(look);
            for (int i = 0; i < sums.length; i++) {
                sums[i] += runs[i];
            }
        });
        looks.add(later.looks);
        levels.add(later.levels);
        naiveError.add(later.naiveError);
        adjustedError.add(later.adjustedError);
        counts.add(later.counts);
    }

    RehearsalReport.Arm report(String variant, double trueDifference, long runs) {
        Map<Ending, Rate> endings = new EnumMap<>(Ending.class);
        for (Ending ending : ENDINGS) {
            endings.put(ending, new Rate(total(ending), runs));
        }
        return new RehearsalReport.Arm(
                variant,
                trueDifference,
                new Rate(total(Ending.BENEFIT) + total(Ending.HARM), runs),
                endings,
                new Rate(counts.get(Count.NAIVE_REJECTION), runs),
                looks.mean().orElseThrow(),
                stopList(),
                counts.get(Count.ESTIMATE) == 0 ? Optional.empty() : Optional.of(estimates()));
    }

    private long total(Ending ending) {
        return stops.values().stream().mapToLong(runs -> runs[ending.ordinal()]).sum();
    }

    private List<RehearsalReport.Stop> stopList() {
        List<RehearsalReport.Stop> list = new ArrayList<>();
        stops.forEach((look, runs) -> {
            Map<Ending, Long> byEnding = new EnumMap<>(Ending.class);
            for (Ending ending : ENDINGS) {
                byEnding.put(ending, runs[ending.ordinal()]);
            }
            list.add(new RehearsalReport.Stop(look, byEnding));
        });
        return list;
    }

    private RehearsalReport.Estimates estimates() {
        return new RehearsalReport.Estimates(
                naiveError.mean().orElseThrow(),
                adjustedError.mean().orElseThrow(),
                estimated(Count.NAIVE_TOO_LOW),
                estimated(Count.ADJUSTED_TOO_LOW),
                estimated(Count.NAIVE_COVERS),
                estimated(Count.REPEATED_COVERS),
                estimated(Count.STAGEWISE_COVERS),
                levels.mean().orElseThrow().value());
    }

    /** How often among the runs that have an estimate. */
    private Rate estimated(Count what) {
        return new Rate(counts.get(what), counts.get(Count.ESTIMATE));
    }
}
