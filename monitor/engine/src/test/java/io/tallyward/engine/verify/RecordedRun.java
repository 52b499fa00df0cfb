package io.tallyward.engine.verify;

import io.tallyward.engine.count.Outcome;
import io.tallyward.engine.count.OutcomeCounts;
import io.tallyward.engine.count.SealCause;
import io.tallyward.engine.count.TallyUpdate;
import io.tallyward.engine.count.WindowTally;
import io.tallyward.engine.count.WindowTally.Cell;
import io.tallyward.engine.count.WindowTally.SegmentCell;
import io.tallyward.engine.decide.DecideShard;
import io.tallyward.engine.plan.Amendment;
import io.tallyward.engine.plan.CountRule.CountBy;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.PlanBook;
import io.tallyward.engine.plan.PlanDigest;
import io.tallyward.engine.record.DecisionRecord;
import java.time.Instant;
import java.util.ArrayList;
import java.util.List;
import java.util.Random;

/** Carries a plan out on drawn counts, window by window, and keeps the records. */
public final class RecordedRun {

    private Plan plan;
    private final Random random;
    private final DecideShard shard;
    private final List<DecisionRecord> records = new ArrayList<>();
    private int window;

    public RecordedRun(Plan plan, long seed) {
        this.plan = plan;
        random = new Random(seed);
        shard = new DecideShard(List.of(plan));
    }

    public List<DecisionRecord> records() {
        return List.copyOf(records);
    }

    /** Amends the plan from some windows after the next one on. */
    public RecordedRun amend(int windows, String reason, Amendment.Change change) {
        List<Amendment> amendments = new ArrayList<>(plan.amendments());
        amendments.add(new Amendment(
                Instant.ofEpochMilli(start() + windows * plan.count().window().toMillis()), reason, change));
        plan = plan.amended(amendments);
        shard.adopt(List.of(new PlanBook.Entry(plan, true)));
        return this;
    }

    /** Windows without any event. */
    public RecordedRun quiet(int windows) {
        window += windows;
        return apply(List.of(), SealCause.WATERMARK);
    }

    /** The same, sealed because the partition was idle. */
    public RecordedRun idle(int windows) {
        window += windows;
        return apply(List.of(), SealCause.IDLE);
    }

    /**
     * Windows in which about as many units arrive as planned, each variant's with its own rate.
     *
     * @param units expected in each window
     */
    public RecordedRun next(int windows, int units, double... rates) {
        return next(windows, units, OutcomeCounts.NONE, plan.sharesIn(epoch()), rates);
    }

    private int epoch() {
        return plan.epochAt(start());
    }

    /**
     * Windows with other shares and other events.
     *
     * @param besides events of each window that are no trials and no successes
     */
    public RecordedRun next(int windows, int units, OutcomeCounts besides, double[] shares, double... rates) {
        for (int i = 0; i < windows; i++) {
            OutcomeCounts.Builder outcomes = new OutcomeCounts.Builder().add(besides);
            List<Cell> cells = new ArrayList<>();
            List<SegmentCell> segments = new ArrayList<>();
            for (int variant = 0; variant < rates.length; variant++) {
                int own = (int) Math.round(units * shares[variant] * (0.97 + 0.06 * random.nextDouble()));
                if (own == 0) {
                    continue;
                }
                Cell cell = cell(variant, own, rates[variant]);
                cells.add(cell);
                outcomes.add(Outcome.TRIAL, cell.trials()).add(Outcome.SUCCESS, cell.successes());
                addSegments(segments, variant, own);
            }
            WindowTally tally = new WindowTally(start(), cells, segments, outcomes.build());
            window++;
            apply(List.of(tally), SealCause.WATERMARK);
        }
        return this;
    }

    private long start() {
        return plan.run().from().toEpochMilli() + window * plan.count().window().toMillis();
    }

    private Cell cell(int variant, int units, double rate) {
        long trials = 0;
        long successes = 0;
        long squares = 0;
        long products = 0;
        long successSquares = 0;
        for (int unit = 0; unit < units; unit++) {
            long x = plan.count().by() == CountBy.VIEW ? 1 + random.nextInt(4) : 1;
            long y = 0;
            double own = Math.min(0.95, rate * (0.5 + random.nextDouble()));
            for (int view = 0; view < x; view++) {
                y += random.nextDouble() < own ? 1 : 0;
            }
            trials += x;
            successes += y;
            squares += x * x;
            products += x * y;
            successSquares += y * y;
        }
        return new Cell(epoch(), variant, units, trials, successes, squares, products, successSquares);
    }

    /** Half of the control's units are on an old release, and of the others' those that are missing are missed there. */
    private void addSegments(List<SegmentCell> segments, int variant, int units) {
        for (String field : plan.splitCheck().segments()) {
            int old = variant == 0 ? units / 2 : units / 3;
            segments.add(new SegmentCell(field, "old", epoch(), variant, old));
            segments.add(new SegmentCell(field, "new", epoch(), variant, units - old));
        }
    }

    private RecordedRun apply(List<WindowTally> windows, SealCause cause) {
        shard.apply(new TallyUpdate(plan.experiment(), PlanDigest.of(plan), 0, 1, start(), cause, windows));
        records.addAll(shard.drain().decisions());
        return this;
    }
}
