package io.tallyward.engine.decide;

import io.tallyward.engine.StateLog;
import io.tallyward.engine.count.Outcome;
import io.tallyward.engine.count.OutcomeCounts;
import io.tallyward.engine.count.SealCause;
import io.tallyward.engine.count.TallyUpdate;
import io.tallyward.engine.count.WindowTally;
import io.tallyward.engine.count.WindowTally.Cell;
import io.tallyward.engine.count.WindowTally.SegmentCell;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.PlanDigest;
import io.tallyward.engine.record.DecisionRecord;
import io.tallyward.engine.record.DecisionRecord.Occasion;
import io.tallyward.engine.record.Notice;
import java.util.ArrayList;
import java.util.Arrays;
import java.util.List;

/**
 * Hosts one shard for one plan in memory: tells it windows, commits after each, keeps its log and everything it decided, and
 * can lose it and start it again.
 */
final class DecideHost {

    private final Plan plan;
    private final StateLog log = new StateLog();
    private final List<DecisionRecord> decisions = new ArrayList<>();
    private final List<Notice> notices = new ArrayList<>();
    private DecideShard shard;
    private int nextWindow;

    DecideHost(Plan plan) {
        this.plan = plan;
        shard = new DecideShard(List.of(plan));
    }

    /** Start of a window, counted from the start of the run. */
    static long startOf(Plan plan, int window) {
        return plan.run().from().toEpochMilli() + window * plan.count().window().toMillis();
    }

    /** A window in which every event made a trial or a success; trials and successes in turn for each variant. */
    static WindowTally window(Plan plan, int window, long... trialsAndSuccesses) {
        return window(plan, window, OutcomeCounts.NONE, trialsAndSuccesses);
    }

    /** The same, with other events besides. */
    static WindowTally window(Plan plan, int window, OutcomeCounts besides, long... trialsAndSuccesses) {
        long start = startOf(plan, window);
        List<Cell> cells = new ArrayList<>();
        OutcomeCounts.Builder outcomes = new OutcomeCounts.Builder().add(besides);
        for (int variant = 0; 2 * variant < trialsAndSuccesses.length; variant++) {
            long trials = trialsAndSuccesses[2 * variant];
            long successes = trialsAndSuccesses[2 * variant + 1];
            if (trials > 0) {
                cells.add(Cell.ofUnits(plan.epochAt(start), variant, trials, successes));
                outcomes.add(Outcome.TRIAL, trials).add(Outcome.SUCCESS, successes);
            }
        }
        return new WindowTally(start, cells, outcomes.build());
    }

    /** The next window, with units by segment: the first variant's and the second's in turn for each value of a field. */
    DecideHost nextBySegment(String field, String[] values, long... units) {
        List<SegmentCell> segments = new ArrayList<>();
        long[] trials = new long[4];
        long start = startOf(plan, nextWindow);
        for (int i = 0; i < units.length; i++) {
            trials[i % 2 * 2] += units[i];
            if (units[i] > 0) {
                segments.add(new SegmentCell(field, values[i / 2], plan.epochAt(start), i % 2, units[i]));
            }
        }
        WindowTally plain = window(plan, nextWindow, trials);
        nextWindow++;
        return take(update(plan, 0, 1, nextWindow, new WindowTally(start, plain.cells(), segments, plain.outcomes())));
    }

    /** What a partition tells when it has sealed all windows before the given one. */
    static TallyUpdate update(Plan plan, int partition, int partitions, int untilWindow, WindowTally... windows) {
        return new TallyUpdate(
                plan.experiment(),
                PlanDigest.of(plan),
                partition,
                partitions,
                startOf(plan, untilWindow),
                SealCause.WATERMARK,
                Arrays.asList(windows));
    }

    /** The next window: trials and successes in turn for each variant. */
    DecideHost next(long... trialsAndSuccesses) {
        return next(OutcomeCounts.NONE, trialsAndSuccesses);
    }

    DecideHost next(OutcomeCounts besides, long... trialsAndSuccesses) {
        WindowTally window = window(plan, nextWindow, besides, trialsAndSuccesses);
        nextWindow++;
        return take(update(plan, 0, 1, nextWindow, window));
    }

    /** The next window, with the sums over units that it raises. */
    DecideHost nextCells(Cell... cells) {
        WindowTally window = window(plan, nextWindow, List.of(cells));
        nextWindow++;
        return take(update(plan, 0, 1, nextWindow, window));
    }

    /** A window of cells in which every event made a trial or a success. */
    static WindowTally window(Plan plan, int window, List<Cell> cells) {
        OutcomeCounts.Builder outcomes = new OutcomeCounts.Builder();
        cells.forEach(cell -> outcomes.add(Outcome.TRIAL, cell.trials()).add(Outcome.SUCCESS, cell.successes()));
        return new WindowTally(startOf(plan, window), cells, outcomes.build());
    }

    /** Several quiet windows. */
    DecideHost quiet(int windows) {
        nextWindow += windows;
        return take(update(plan, 0, 1, nextWindow));
    }

    DecideHost take(TallyUpdate update) {
        shard.apply(update);
        DecideEffects effects = shard.drain();
        log.append(effects.state());
        decisions.addAll(effects.decisions());
        notices.addAll(effects.notices());
        return this;
    }

    DecideHost restart(int cleaned) {
        shard = new DecideShard(List.of(plan));
        log.replayCompacted(cleaned, shard::restore);
        return this;
    }

    StateLog log() {
        return log;
    }

    /** All records, that of the plan first. */
    List<DecisionRecord> records() {
        return List.copyOf(decisions);
    }

    /** What was decided under the plan. */
    List<DecisionRecord> decisions() {
        return decisions.stream()
                .filter(record -> record.occasion() != Occasion.PLAN)
                .toList();
    }

    DecisionRecord lastDecision() {
        return decisions.get(decisions.size() - 1);
    }

    DecisionRecord.Comparison lastLook() {
        return lastDecision().comparisons().get(0);
    }

    List<Notice> notices() {
        return List.copyOf(notices);
    }

    List<String> noticeKinds() {
        return notices.stream()
                .map(notice -> notice.kind().code() + (notice.variant().isEmpty() ? "" : " " + notice.variant()))
                .toList();
    }

    ExperimentView view() {
        return shard.views().get(plan.experiment());
    }
}
