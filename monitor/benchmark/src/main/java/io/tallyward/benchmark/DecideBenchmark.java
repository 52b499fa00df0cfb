package io.tallyward.benchmark;

import io.tallyward.engine.count.Outcome;
import io.tallyward.engine.count.OutcomeCounts;
import io.tallyward.engine.count.SealCause;
import io.tallyward.engine.count.TallyUpdate;
import io.tallyward.engine.count.WindowTally;
import io.tallyward.engine.count.WindowTally.Cell;
import io.tallyward.engine.decide.DecideEffects;
import io.tallyward.engine.decide.DecideShard;
import io.tallyward.engine.plan.CountRule;
import io.tallyward.engine.plan.CountRule.CountBy;
import io.tallyward.engine.plan.LookSchedule;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.PlanDigest;
import io.tallyward.engine.plan.Run;
import io.tallyward.engine.plan.Spending;
import io.tallyward.engine.plan.SplitCheckPlan;
import io.tallyward.engine.plan.TestPlan;
import io.tallyward.engine.plan.TrustLimits;
import io.tallyward.engine.plan.Variant;
import java.time.Duration;
import java.time.Instant;
import java.util.List;
import java.util.Optional;
import java.util.concurrent.TimeUnit;
import org.openjdk.jmh.annotations.Benchmark;
import org.openjdk.jmh.annotations.BenchmarkMode;
import org.openjdk.jmh.annotations.Fork;
import org.openjdk.jmh.annotations.Measurement;
import org.openjdk.jmh.annotations.Mode;
import org.openjdk.jmh.annotations.OutputTimeUnit;
import org.openjdk.jmh.annotations.Scope;
import org.openjdk.jmh.annotations.Setup;
import org.openjdk.jmh.annotations.State;
import org.openjdk.jmh.annotations.Warmup;

/** What a window costs that no look falls into: most of them. Two variants, one partition, a window of five minutes. */
@State(Scope.Benchmark)
@BenchmarkMode(Mode.AverageTime)
@OutputTimeUnit(TimeUnit.MICROSECONDS)
@Fork(1)
@Warmup(iterations = 4, time = 500, timeUnit = TimeUnit.MILLISECONDS)
@Measurement(iterations = 5, time = 500, timeUnit = TimeUnit.MILLISECONDS)
public class DecideBenchmark {

    private static final Duration WINDOW = Duration.ofMinutes(5);

    /** A run that no measurement gets to the end of, for an effect too small for its looks to come. */
    private static final Plan PLAN = new Plan(
            "quay-banner",
            "Do more people book when the banner shows the quay?",
            "web",
            new CountRule(CountBy.UNIT, Duration.ofMinutes(30), Duration.ofMinutes(10), WINDOW),
            List.of(new Variant("plain", 0.5, true), new Variant("wide", 0.5, false)),
            TestPlan.of(0.05, TestPlan.Sides.TWO, Spending.of(Spending.Family.OBRIEN_FLEMING), 0.8, 0.12, 1e-6),
            new LookSchedule.AtFractions(List.of(1.0)),
            Optional.empty(),
            new SplitCheckPlan(SplitCheckPlan.DEFAULT_ALPHA),
            TrustLimits.DEFAULT,
            new Run(Instant.parse("2026-05-04T00:00:00Z"), Duration.ZERO, Duration.ofDays(1_000_000)),
            List.of());

    private static final String DIGEST = PlanDigest.of(PLAN);

    private static final List<Cell> CELLS = List.of(Cell.ofUnits(0, 0, 500, 60), Cell.ofUnits(0, 1, 500, 61));

    private static final OutcomeCounts OUTCOMES = new OutcomeCounts.Builder()
            .add(Outcome.TRIAL, 1000)
            .add(Outcome.SUCCESS, 121)
            .build();

    private DecideShard shard;
    private long start;

    @Setup
    public void begin() {
        shard = new DecideShard(List.of(PLAN));
        start = PLAN.run().from().toEpochMilli();
    }

    /** From a sealed window to what must be made durable. */
    @Benchmark
    public DecideEffects window() {
        WindowTally tally = new WindowTally(start, CELLS, OUTCOMES);
        start += WINDOW.toMillis();
        shard.apply(new TallyUpdate(PLAN.experiment(), DIGEST, 0, 1, start, SealCause.WATERMARK, List.of(tally)));
        return shard.drain();
    }
}
