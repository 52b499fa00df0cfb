package io.tallyward.benchmark;

import io.tallyward.statistics.split.SequentialSplitTest;
import java.util.Arrays;
import java.util.concurrent.TimeUnit;
import org.openjdk.jmh.annotations.Benchmark;
import org.openjdk.jmh.annotations.BenchmarkMode;
import org.openjdk.jmh.annotations.Fork;
import org.openjdk.jmh.annotations.Measurement;
import org.openjdk.jmh.annotations.Mode;
import org.openjdk.jmh.annotations.OutputTimeUnit;
import org.openjdk.jmh.annotations.Param;
import org.openjdk.jmh.annotations.Scope;
import org.openjdk.jmh.annotations.Setup;
import org.openjdk.jmh.annotations.State;
import org.openjdk.jmh.annotations.Warmup;

/** The sequential split check after an update, with about a million units in each cell. */
@State(Scope.Benchmark)
@BenchmarkMode(Mode.AverageTime)
@OutputTimeUnit(TimeUnit.NANOSECONDS)
@Fork(1)
@Warmup(iterations = 4, time = 500, timeUnit = TimeUnit.MILLISECONDS)
@Measurement(iterations = 5, time = 500, timeUnit = TimeUnit.MILLISECONDS)
public class SplitBenchmark {

    private static final double CONCENTRATION = 10_000;
    private static final long COUNT = 1_000_000;

    /** Number of cells. */
    @Param({"2", "4"})
    public int cells;

    private double[] shares;
    private long[] counts;
    private int at;

    @Setup
    public void count() {
        shares = new double[cells];
        Arrays.fill(shares, 1.0 / cells);
        counts = new long[cells];
        Arrays.setAll(counts, i -> COUNT + 7L * i);
    }

    @Benchmark
    public double update() {
        counts[at]++;
        at = (at + 1) % cells;
        return SequentialSplitTest.logBayesFactor(CONCENTRATION, shares, counts);
    }
}
