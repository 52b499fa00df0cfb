package io.tallyward.service.rehearse;

import java.time.Duration;
import java.util.ArrayList;
import java.util.List;

/** Sums over runs. Added up block by block in the order of the runs, so that rounding is always the same. Not thread-safe. */
final class RunStatistics {

    private static final double DAY_MILLIS = Duration.ofDays(1).toMillis();

    private final List<ArmStatistics> arms = new ArrayList<>();
    private final Moments looks = new Moments();
    private final Moments trials = new Moments();
    private final Moments days = new Moments();
    private long runs;
    private long rejections;
    private long benefits;
    private long harms;
    private long futile;
    private long withheld;
    private long mismatches;
    private long naiveRejections;

    RunStatistics(int challengers) {
        for (int i = 0; i < challengers; i++) {
            arms.add(new ArmStatistics());
        }
    }

    void add(RunResult run, double[] trueDifferences) {
        runs++;
        boolean rejected = run.any(Ending.BENEFIT) || run.any(Ending.HARM);
        rejections += rejected ? 1 : 0;
        benefits += run.any(Ending.BENEFIT) ? 1 : 0;
        harms += run.any(Ending.HARM) ? 1 : 0;
        withheld += !rejected && run.any(Ending.WITHHELD) ? 1 : 0;
        futile += run.all(Ending.FUTILITY) ? 1 : 0;
        mismatches += run.mismatch() ? 1 : 0;
        naiveRejections += run.arms().stream().anyMatch(RunResult.Arm::naiveRejection) ? 1 : 0;
        looks.add(run.looks());
        trials.add(run.trials());
        days.add(run.millis() / DAY_MILLIS);
        for (int i = 0; i < trueDifferences.length; i++) {
            arms.get(i).add(run.arms().get(i), trueDifferences[i]);
        }
    }

    void add(RunStatistics later) {
        runs += later.runs;
        rejections += later.rejections;
        benefits += later.benefits;
        harms += later.harms;
        futile += later.futile;
        withheld += later.withheld;
        mismatches += later.mismatches;
        naiveRejections += later.naiveRejections;
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
            reports.add(arms.get(i).report(name, trueDifferences[i], runs));
        }
        return new RehearsalReport(
                rehearsed.step(),
                rehearsed.steps(),
                rehearsed.arrivals(),
                rate(rejections),
                rate(benefits),
                rate(harms),
                rate(futile),
                rate(runs - rejections - futile - withheld),
                rate(withheld),
                rate(mismatches),
                rate(naiveRejections),
                looks.mean().orElseThrow(),
                trials.mean().orElseThrow(),
                days.mean().orElseThrow(),
                reports);
    }

    private Rate rate(long count) {
        return new Rate(count, runs);
    }
}
