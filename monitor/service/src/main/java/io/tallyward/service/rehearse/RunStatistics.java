package io.tallyward.service.rehearse;

import java.time.Duration;
import java.util.ArrayList;
import java.util.Arrays;
import java.util.List;
import java.util.Optional;
import java.util.stream.IntStream;

/** Sums over runs. Added up block by block in the order of the runs, so that rounding is always the same. Not thread-safe. */
final class RunStatistics {

    private static final double DAY_MILLIS = Duration.ofDays(1).toMillis();

    private final List<ArmStatistics> arms = new ArrayList<>();
    private final Moments looks = new Moments();
    private final Moments trials = new Moments();
    private final Moments days = new Moments();
    private final Moments waited = new Moments();
    private final Counters<Count> counts = new Counters<>(Count.class);

    private enum Count {
        RUN,
        REJECTION,
        BENEFIT,
        HARM,
        FUTILE,
        WITHHELD,
        MISMATCH,
        NAIVE_REJECTION,
        FALSE_ALARM
    }

    RunStatistics(int challengers) {
        for (int i = 0; i < challengers; i++) {
            arms.add(new ArmStatistics());
        }
    }

    void add(RunResult run, double[] trueDifferences) {
        counts.count(Count.RUN, true);
        boolean rejected = run.any(Ending.BENEFIT) || run.any(Ending.HARM);
        counts.count(Count.REJECTION, rejected);
        counts.count(Count.BENEFIT, run.any(Ending.BENEFIT));
        counts.count(Count.HARM, run.any(Ending.HARM));
        counts.count(Count.WITHHELD, !rejected && run.any(Ending.WITHHELD));
        counts.count(Count.FUTILE, run.all(Ending.FUTILITY));
        counts.count(Count.MISMATCH, run.mismatch());
        counts.count(Count.NAIVE_REJECTION, run.arms().stream().anyMatch(RunResult.Arm::naiveRejection));
        counts.count(Count.FALSE_ALARM, falseAlarm(run, trueDifferences));
        waited.add(run.waited());
        looks.add(run.looks());
        trials.add(run.trials());
        days.add(run.millis() / DAY_MILLIS);
        for (int i = 0; i < trueDifferences.length; i++) {
            arms.get(i).add(run.arms().get(i), trueDifferences[i]);
        }
    }

    private static boolean falseAlarm(RunResult run, double[] trueDifferences) {
        return IntStream.range(0, trueDifferences.length)
                .anyMatch(i -> trueDifferences[i] == 0 && run.arms().get(i).rejected());
    }

    void add(RunStatistics later) {
        counts.add(later.counts);
        waited.add(later.waited);
        looks.add(later.looks);
        trials.add(later.trials);
        days.add(later.days);
        for (int i = 0; i < arms.size(); i++) {
            arms.get(i).add(later.arms.get(i));
        }
    }

    /** The report on at least one run. */
    RehearsalReport report(RehearsedPlan rehearsed, double[] trueDifferences) {
        List<RehearsalReport.Arm> reports = new ArrayList<>();
        for (int i = 0; i < trueDifferences.length; i++) {
            String name = rehearsed.plan().challengers().get(i).name();
            reports.add(arms.get(i).report(name, trueDifferences[i], counts.get(Count.RUN)));
        }
        return new RehearsalReport(
                rehearsed.step(),
                rehearsed.steps(),
                rehearsed.arrivals(),
                rate(Count.REJECTION),
                rate(Count.BENEFIT),
                rate(Count.HARM),
                rate(Count.FUTILE),
                exhausted(),
                rate(Count.WITHHELD),
                rate(Count.MISMATCH),
                rate(Count.NAIVE_REJECTION),
                looks.mean().orElseThrow(),
                trials.mean().orElseThrow(),
                days.mean().orElseThrow(),
                reports,
                Arrays.stream(trueDifferences).anyMatch(difference -> difference == 0)
                        ? Optional.of(rate(Count.FALSE_ALARM))
                        : Optional.empty(),
                waited.mean().orElseThrow());
    }

    private Rate rate(Count what) {
        return new Rate(counts.get(what), counts.get(Count.RUN));
    }

    /** The runs that ended in no other way. */
    private Rate exhausted() {
        long others = counts.get(Count.REJECTION) + counts.get(Count.FUTILE) + counts.get(Count.WITHHELD);
        return new Rate(counts.get(Count.RUN) - others, counts.get(Count.RUN));
    }
}
