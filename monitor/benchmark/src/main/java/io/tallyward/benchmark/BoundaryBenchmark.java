package io.tallyward.benchmark;

import io.tallyward.statistics.boundary.BoundarySequence;
import io.tallyward.statistics.boundary.Look;
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
import org.openjdk.jmh.annotations.State;
import org.openjdk.jmh.annotations.Warmup;

/** Boundaries as looks happen: two-sided 0.05, O'Brien-Fleming type, equal looks. */
@State(Scope.Benchmark)
@BenchmarkMode(Mode.AverageTime)
@OutputTimeUnit(TimeUnit.MICROSECONDS)
@Fork(1)
@Warmup(iterations = 4, time = 500, timeUnit = TimeUnit.MILLISECONDS)
@Measurement(iterations = 5, time = 500, timeUnit = TimeUnit.MILLISECONDS)
public class BoundaryBenchmark {

    private static final double TAIL = 0.025;

    /** Number of looks of a whole sequence. */
    @Param({"10", "168"})
    public int looks;

    /** Every look of a sequence, solved one after the other. */
    @Benchmark
    public List<Look> sequence() {
        BoundarySequence sequence = new BoundarySequence();
        List<Look> taken = new ArrayList<>();
        for (int k = 1; k <= looks; k++) {
            taken.add(next(sequence, k, looks));
        }
        return taken;
    }

    static Look next(BoundarySequence sequence, int k, int of) {
        double fraction = (double) k / of;
        double spent = SpendingFunction.obrienFlemingType().spent(TAIL, fraction);
        return sequence.next(fraction, spent, spent);
    }
}
