package io.tallyward.benchmark;

import io.tallyward.statistics.boundary.BoundarySequence;
import io.tallyward.statistics.boundary.Look;
import java.util.concurrent.TimeUnit;
import org.openjdk.jmh.annotations.Benchmark;
import org.openjdk.jmh.annotations.BenchmarkMode;
import org.openjdk.jmh.annotations.Fork;
import org.openjdk.jmh.annotations.Measurement;
import org.openjdk.jmh.annotations.Mode;
import org.openjdk.jmh.annotations.OutputTimeUnit;
import org.openjdk.jmh.annotations.Scope;
import org.openjdk.jmh.annotations.State;
import org.openjdk.jmh.annotations.Warmup;

/** One more look after 999: two-sided 0.05, O'Brien-Fleming type, equal looks. */
@State(Scope.Benchmark)
@BenchmarkMode(Mode.AverageTime)
@OutputTimeUnit(TimeUnit.MICROSECONDS)
@Fork(1)
@Warmup(iterations = 4, time = 500, timeUnit = TimeUnit.MILLISECONDS)
@Measurement(iterations = 5, time = 500, timeUnit = TimeUnit.MILLISECONDS)
public class LateLookBenchmark {

    private static final int LOOKS = 1000;

    private final BoundarySequence before = new BoundarySequence();

    public LateLookBenchmark() {
        for (int k = 1; k < LOOKS; k++) {
            BoundaryBenchmark.next(before, k, LOOKS);
        }
    }

    /** A copy has not laid out the nodes of the last look yet, so that this is part of the step. */
    @Benchmark
    public Look thousandthLook() {
        return BoundaryBenchmark.next(before.copy(), LOOKS, LOOKS);
    }
}
