package io.tallyward.benchmark;

import io.tallyward.statistics.boundary.Design;
import io.tallyward.statistics.boundary.DesignRequest;
import io.tallyward.statistics.spending.SpendingFunction;
import java.util.Optional;
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

/** Whole designs: boundaries, drift and expected duration for two-sided 0.05, power 0.8, equal looks. */
@State(Scope.Benchmark)
@BenchmarkMode(Mode.AverageTime)
@OutputTimeUnit(TimeUnit.MILLISECONDS)
@Fork(1)
@Warmup(iterations = 4, time = 500, timeUnit = TimeUnit.MILLISECONDS)
@Measurement(iterations = 5, time = 500, timeUnit = TimeUnit.MILLISECONDS)
public class DesignBenchmark {

    private static final double TAIL = 0.025;
    private static final double POWER = 0.8;
    private static final double GAMMA = -2;

    /** The two usual shapes. */
    public enum Shape {
        OBRIEN_FLEMING_TYPE(SpendingFunction.obrienFlemingType()),
        POCOCK_TYPE(SpendingFunction.pocockType());

        private final SpendingFunction spending;

        Shape(SpendingFunction spending) {
            this.spending = spending;
        }
    }

    /** Number of looks: daily for three weeks, hourly for one. */
    @Param({"20", "168"})
    public int looks;

    /** How error is spent. */
    @Param
    public Shape shape;

    /** Efficacy only. */
    @Benchmark
    public Design design() {
        return Design.of(request(Optional.empty()));
    }

    /** With futility bounds that spend the type II error by an exponential family. */
    @Benchmark
    public Design designWithFutility() {
        return Design.of(request(Optional.of(SpendingFunction.hwangShihDecani(GAMMA))));
    }

    private DesignRequest request(Optional<SpendingFunction> futility) {
        double[] fractions = new double[looks];
        for (int k = 0; k < looks; k++) {
            fractions[k] = (k + 1.0) / looks;
        }
        return new DesignRequest(TAIL, true, shape.spending, POWER, fractions, futility);
    }
}
