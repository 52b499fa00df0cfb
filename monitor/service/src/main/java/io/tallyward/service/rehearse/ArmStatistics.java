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
    private long naiveRejections;
    private long estimates;
    private long naiveTooLow;
    private long adjustedTooLow;
    private long naiveCovers;
    private long repeatedCovers;
    private long stagewiseCovers;

    void add(RunResult.Arm arm, double trueDifference) {
        at(arm.looks())[arm.ending().ordinal()]++;
        looks.add(arm.looks());
        naiveRejections += arm.naiveRejection() ? 1 : 0;
        arm.estimate().ifPresent(estimate -> add(estimate, trueDifference));
    }

    private long[] at(int look) {
        return stops.computeIfAbsent(look, key -> new long[ENDINGS.length]);
    }

    private void add(StopEstimate estimate, double trueDifference) {
        estimates++;
        levels.add(estimate.level());
        naiveError.add(estimate.naive() - trueDifference);
        adjustedError.add(estimate.adjusted() - trueDifference);
        naiveTooLow += estimate.naive() < trueDifference ? 1 : 0;
        adjustedTooLow += estimate.adjusted() < trueDifference ? 1 : 0;
        naiveCovers += estimate.naiveCovers() ? 1 : 0;
        repeatedCovers += estimate.repeatedCovers() ? 1 : 0;
        stagewiseCovers += estimate.stagewiseCovers() ? 1 : 0;
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
        naiveRejections += later.naiveRejections;
        estimates += later.estimates;
        naiveTooLow += later.naiveTooLow;
        adjustedTooLow += later.adjustedTooLow;
        naiveCovers += later.naiveCovers;
        repeatedCovers += later.repeatedCovers;
        stagewiseCovers += later.stagewiseCovers;
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
                new Rate(naiveRejections, runs),
                looks.mean().orElseThrow(),
                stopList(),
                estimates == 0 ? Optional.empty() : Optional.of(estimates()));
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
                new Rate(naiveTooLow, estimates),
                new Rate(adjustedTooLow, estimates),
                new Rate(naiveCovers, estimates),
                new Rate(repeatedCovers, estimates),
                new Rate(stagewiseCovers, estimates),
                levels.mean().orElseThrow().value());
    }
}
