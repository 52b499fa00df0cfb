package io.tallyward.benchmark;

import io.tallyward.engine.count.CountSettings;
import io.tallyward.engine.count.CountShard;
import io.tallyward.engine.event.EventKind;
import io.tallyward.engine.event.EventSlot;
import io.tallyward.engine.event.RejectReason;
import io.tallyward.engine.plan.CountRule;
import io.tallyward.engine.plan.CountRule.CountBy;
import io.tallyward.engine.plan.LookSchedule;
import io.tallyward.engine.plan.Plan;
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
import java.util.SplittableRandom;
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
import org.openjdk.jmh.annotations.Warmup;

/** What it costs to count one event that has been read: of any of so many open units, in a random order. */
@State(Scope.Benchmark)
@BenchmarkMode(Mode.AverageTime)
@OutputTimeUnit(TimeUnit.NANOSECONDS)
@Fork(1)
@Warmup(iterations = 4, time = 500, timeUnit = TimeUnit.MILLISECONDS)
@Measurement(iterations = 5, time = 500, timeUnit = TimeUnit.MILLISECONDS)
public class CountBenchmark {

    private static final Plan PLAN = new Plan(
            "quay-banner",
            "Do more people book when the banner shows the quay?",
            "web",
            new CountRule(CountBy.UNIT, Duration.ofMinutes(30), Duration.ofMinutes(10), Duration.ofMinutes(5)),
            List.of(new Variant("plain", 0.5, true), new Variant("wide", 0.5, false)),
            TestPlan.of(0.05, TestPlan.Sides.TWO, Spending.of(Spending.Family.OBRIEN_FLEMING), 0.8, 0.12, 0.006),
            new LookSchedule.AtFractions(List.of(1.0)),
            Optional.empty(),
            new SplitCheckPlan(SplitCheckPlan.DEFAULT_ALPHA),
            TrustLimits.DEFAULT,
            new Run(Instant.parse("2026-05-04T00:00:00Z"), Duration.ZERO, Duration.ofDays(28)),
            List.of());

    private static final long START = PLAN.run().from().toEpochMilli();
    private static final int DIGITS = 9;

    /** Open units; the first number fits the caches, the second does not. */
    @Param({"20000", "1000000"})
    private int units;

    private final char[] name = "visitor-000000000".toCharArray();
    private final EventSlot slot = new EventSlot();
    private SplittableRandom random;
    private CountShard shard;

    /** Shows each unit its variant once. Anew each time: a unit with very many views would be kept in another way. */
    @Setup(Level.Iteration)
    public void fill() {
        random = new SplittableRandom(units);
        CountSettings settings = new CountSettings(Duration.ofMinutes(5), Duration.ofDays(1), new byte[] {1});
        shard = new CountShard(0, 1, List.of(PLAN), settings, List.of("events"));
        slot.kind(EventKind.VIEW);
        slot.place(0, 0);
        slot.id("e1".toCharArray(), 0, 2);
        slot.at(START);
        for (int unit = 0; unit < units; unit++) {
            apply(unit);
        }
        shard.drain();
        slot.at(START + 1_000);
    }

    /** A further view of a unit that is known. */
    @Benchmark
    public Optional<RejectReason> furtherView() {
        return apply(random.nextInt(units));
    }

    private Optional<RejectReason> apply(int unit) {
        int rest = unit;
        for (int i = name.length - 1; i >= name.length - DIGITS; i--) {
            name[i] = (char) ('0' + rest % 10);
            rest /= 10;
        }
        slot.unit(name, 0, name.length);
        return shard.apply(0, START, slot);
    }
}
