package io.tallyward.benchmark;

import io.tallyward.engine.count.Outcome;
import io.tallyward.engine.count.OutcomeCounts;
import io.tallyward.engine.count.SealCause;
import io.tallyward.engine.count.TallyUpdate;
import io.tallyward.engine.count.WindowTally;
import io.tallyward.engine.count.WindowTally.Cell;
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
import java.util.ArrayList;
import java.util.List;
import java.util.Locale;
import java.util.Optional;
import java.util.Random;
import java.util.concurrent.TimeUnit;
import org.openjdk.jmh.annotations.Benchmark;
import org.openjdk.jmh.annotations.BenchmarkMode;
import org.openjdk.jmh.annotations.Fork;
import org.openjdk.jmh.annotations.Level;
import org.openjdk.jmh.annotations.Measurement;
import org.openjdk.jmh.annotations.Mode;
import org.openjdk.jmh.annotations.OutputTimeUnit;
import org.openjdk.jmh.annotations.Param;
import org.openjdk.jmh.annotations.Scope;
import org.openjdk.jmh.annotations.Setup;
import org.openjdk.jmh.annotations.State;
import org.openjdk.jmh.annotations.TearDown;
import org.openjdk.jmh.annotations.Warmup;

/**
 * Many experiments of two variants in one shard, with a look every hour, none of which shows a difference: a run of four weeks
 * as fast as it goes. Prints windows per second, how much faster than the clock that is, and the heap that each experiment
 * holds at the end. The parameters make it shorter: fewer experiments, or the first days alone.
 */
@State(Scope.Benchmark)
@BenchmarkMode(Mode.SingleShotTime)
@OutputTimeUnit(TimeUnit.SECONDS)
@Fork(value = 1, jvmArgs = "-Xmx3g")
@Warmup(iterations = 0)
@Measurement(iterations = 1)
public class ManyExperimentsBenchmark {

    private static final Instant FROM = Instant.parse("2026-05-04T00:00:00Z");
    private static final Duration RUN = Duration.ofDays(28);
    private static final int TRIALS_PER_HOUR = 20;
    private static final double RATE = 0.12;

    /** How many experiments run at the same time. */
    @Param("10000")
    private int experiments;

    /** How many days of the run are carried out. */
    @Param("28")
    private int days;

    /** Length of a window in minutes; a look is due every hour all the same. */
    @Param("60")
    private int windowMinutes;

    private final List<Plan> plans = new ArrayList<>();
    private final List<String> digests = new ArrayList<>();
    private final Random random = new Random(20261201);
    private DecideShard shard;
    private long heapBefore;
    private long nanos;
    private long records;

    /** Plans whose looks are all needed: information is complete about when the run ends. */
    @Setup(Level.Trial)
    public void plan() {
        Duration window = Duration.ofMinutes(windowMinutes);
        for (int i = 0; i < experiments; i++) {
            Plan plan = new Plan(
                    "quay-banner-" + i,
                    "Do more people book when the banner shows the quay?",
                    "web",
                    new CountRule(CountBy.UNIT, Duration.ofMinutes(30), Duration.ofMinutes(10), window),
                    List.of(new Variant("plain", 0.5, true), new Variant("wide", 0.5, false)),
                    TestPlan.of(
                            0.05, TestPlan.Sides.TWO, Spending.of(Spending.Family.OBRIEN_FLEMING), 0.8, RATE, 0.0112),
                    new LookSchedule.Every(Duration.ofHours(1)),
                    Optional.empty(),
                    new SplitCheckPlan(SplitCheckPlan.DEFAULT_ALPHA),
                    TrustLimits.DEFAULT,
                    new Run(FROM, Duration.ZERO, RUN),
                    List.of());
            plans.add(plan);
            digests.add(PlanDigest.of(plan));
        }
        heapBefore = heap();
        shard = new DecideShard(plans);
    }

    /** Window after window, of every experiment. */
    @Benchmark
    public long run() {
        long begun = System.nanoTime();
        long step = Duration.ofMinutes(windowMinutes).toMillis();
        long end = FROM.plus(Duration.ofDays(days)).toEpochMilli();
        for (long start = FROM.toEpochMilli(); start < end; start += step) {
            for (int i = 0; i < plans.size(); i++) {
                shard.apply(new TallyUpdate(
                        plans.get(i).experiment(),
                        digests.get(i),
                        0,
                        1,
                        start + step,
                        SealCause.WATERMARK,
                        List.of(window(start))));
            }
            records += shard.drain().decisions().size();
        }
        nanos = System.nanoTime() - begun;
        return records;
    }

    private WindowTally window(long start) {
        double expected = TRIALS_PER_HOUR * windowMinutes / 60.0;
        List<Cell> cells = new ArrayList<>(2);
        OutcomeCounts.Builder outcomes = new OutcomeCounts.Builder();
        for (int variant = 0; variant < 2; variant++) {
            int trials = (int) Math.max(1, Math.round(expected + Math.sqrt(expected) * random.nextGaussian()));
            int successes = 0;
            for (int trial = 0; trial < trials; trial++) {
                successes += random.nextDouble() < RATE ? 1 : 0;
            }
            cells.add(Cell.ofUnits(0, variant, trials, successes));
            outcomes.add(Outcome.TRIAL, trials).add(Outcome.SUCCESS, successes);
        }
        return new WindowTally(start, cells, outcomes.build());
    }

    /** Prints what the time alone does not say. */
    @TearDown(Level.Trial)
    public void say() {
        long held = heap() - heapBefore;
        double seconds = nanos / 1e9;
        double windows = (double) experiments * days * 24 * 60 / windowMinutes;
        System.out.printf(
                Locale.ROOT,
                "%n%,d experiments, %d days: %,.0f windows, %,d records in %.1f s; %,.0f windows/s, %,.0f times as fast as"
                        + " the clock; %.1f kB of heap per experiment%n",
                experiments,
                days,
                windows,
                records,
                seconds,
                windows / seconds,
                days * 86_400 / seconds,
                held / 1e3 / experiments);
        if (shard.views().size() > experiments) {
            throw new IllegalStateException("more experiments than were planned");
        }
    }

    private static long heap() {
        for (int i = 0; i < 3; i++) {
            System.gc();
        }
        return Runtime.getRuntime().totalMemory() - Runtime.getRuntime().freeMemory();
    }
}
