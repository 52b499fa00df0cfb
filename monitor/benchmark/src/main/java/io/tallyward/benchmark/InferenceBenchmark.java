package io.tallyward.benchmark;

import io.tallyward.statistics.boundary.BoundarySequence;
import io.tallyward.statistics.boundary.Look;
import io.tallyward.statistics.inference.Estimate;
import io.tallyward.statistics.inference.StagewiseInference;
import io.tallyward.statistics.spending.SpendingFunction;
import java.util.ArrayList;
import java.util.List;
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

/** P-value, median-unbiased estimate and interval after a stop at the last of some equal looks, two-sided 0.05. */
@State(Scope.Benchmark)
@BenchmarkMode(Mode.AverageTime)
@OutputTimeUnit(TimeUnit.MILLISECONDS)
@Fork(1)
@Warmup(iterations = 4, time = 500, timeUnit = TimeUnit.MILLISECONDS)
@Measurement(iterations = 5, time = 500, timeUnit = TimeUnit.MILLISECONDS)
public class InferenceBenchmark {

    private static final double TAIL = 0.025;
    private static final double Z = 2.3;

    /** Number of looks up to the stop. */
    @Param({"10", "60", "168"})
    public int looks;

    private List<Look> taken;

    @Setup
    public void solve() {
        BoundarySequence sequence = new BoundarySequence();
        taken = new ArrayList<>();
        for (int k = 1; k <= looks; k++) {
            double fraction = (double) k / looks;
            double spent = SpendingFunction.obrienFlemingType().spent(TAIL, fraction);
            taken.add(sequence.next(fraction, spent, spent));
        }
    }

    /** All that is reported after a stop; the p-value comes first, as a by-product. */
    @Benchmark
    public Estimate afterStop() {
        return StagewiseInference.of(taken, Z).estimate(1 - 2 * TAIL);
    }
}
