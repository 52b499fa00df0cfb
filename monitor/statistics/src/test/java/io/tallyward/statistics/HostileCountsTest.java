package io.tallyward.statistics;

import static org.junit.jupiter.api.Assertions.assertTrue;
import static org.junit.jupiter.api.Assertions.fail;

import io.tallyward.statistics.multiplicity.AdjustedProbability;
import io.tallyward.statistics.multiplicity.AlphaGraph;
import io.tallyward.statistics.multiplicity.Dunnett;
import io.tallyward.statistics.proportion.CommonOddsRatio;
import io.tallyward.statistics.proportion.CommonRateDifference;
import io.tallyward.statistics.proportion.CommonRateRatio;
import io.tallyward.statistics.proportion.Interval;
import io.tallyward.statistics.proportion.MantelHaenszelTest;
import io.tallyward.statistics.proportion.RateDifference;
import io.tallyward.statistics.proportion.RateRatio;
import io.tallyward.statistics.proportion.ScoreInterval;
import io.tallyward.statistics.proportion.Stratum;
import io.tallyward.statistics.proportion.ZStatistic;
import io.tallyward.statistics.ratio.RatioComparison;
import io.tallyward.statistics.ratio.RatioEstimate;
import io.tallyward.statistics.ratio.RatioStratum;
import io.tallyward.statistics.ratio.StratifiedRatioComparison;
import io.tallyward.statistics.ratio.UnitSums;
import io.tallyward.statistics.split.PearsonSplit;
import io.tallyward.statistics.split.SplitChangePoint;
import io.tallyward.statistics.split.WorstSegment;
import java.lang.reflect.InvocationTargetException;
import java.lang.reflect.Method;
import java.lang.reflect.Modifier;
import java.math.BigInteger;
import java.util.ArrayList;
import java.util.Arrays;
import java.util.Collection;
import java.util.Collections;
import java.util.List;
import java.util.Map;
import java.util.Optional;
import java.util.OptionalDouble;
import java.util.Random;
import java.util.Set;
import java.util.function.Supplier;
import org.junit.jupiter.api.Test;

/**
 * Whatever comes in, a number goes out, or an explicit absence, or an IllegalArgumentException that names the value and
 * the accepted range. Of a record that goes out, every public method without parameters is asked, too.
 */
class HostileCountsTest {

    private static final long SEED = 53;

    private static final double[] REALS = {
        Double.NaN,
        Double.NEGATIVE_INFINITY,
        -Double.MAX_VALUE,
        -1e9,
        -1,
        -Double.MIN_VALUE,
        -0.0,
        0,
        Double.MIN_VALUE,
        1e-300,
        1e-201,
        1e-16,
        0.05,
        0.5,
        0.95,
        Math.nextDown(1.0),
        1,
        Math.nextUp(1.0),
        2,
        39.9,
        40.1,
        1e9,
        1e160,
        Double.MAX_VALUE,
        Double.POSITIVE_INFINITY
    };

    private static final long[] COUNTS = {
        Long.MIN_VALUE, -1, 0, 1, 2, 7, 1L << 31, 1L << 53, (1L << 53) + 1, Long.MAX_VALUE
    };

    private static final Stratum FULL = new Stratum(3, 10, 4, 12);

    @Test
    void proportionsOfHostileCounts() {
        List<Stratum> strata = new ArrayList<>();
        for (long a : COUNTS) {
            for (long n1 : COUNTS) {
                for (long b : COUNTS) {
                    for (long n0 : COUNTS) {
                        ask(() -> new Stratum(a, n1, b, n0)).ifPresent(strata::add);
                    }
                }
                ask(() -> ScoreInterval.wilson(a, n1, 0.95));
            }
        }
        assertTrue(strata.size() > 100, "some are in range: " + strata.size());
        for (Stratum stratum : strata) {
            ask(() -> ZStatistic.pooled(stratum));
            ask(() -> RateDifference.of(stratum));
            ask(() -> RateRatio.of(stratum).flatMap(ratio -> ratio.interval(0.95)));
            ask(() -> ScoreInterval.newcombe(stratum, 0.95));
            ask(() -> ScoreInterval.miettinenNurminen(stratum, 0.95));
        }
        Random random = new Random(SEED);
        for (int run = 0; run < 4_000; run++) {
            List<Stratum> some = new ArrayList<>();
            for (int i = random.nextInt(4); i > 0; i--) {
                some.add(strata.get(random.nextInt(strata.size())));
            }
            ask(() -> MantelHaenszelTest.of(some));
            ask(() -> CommonOddsRatio.of(some).flatMap(ratio -> ratio.interval(0.95)));
            ask(() -> CommonRateRatio.of(some).flatMap(ratio -> ratio.interval(0.95)));
            ask(() -> CommonRateDifference.of(some).map(difference -> difference.satoInterval(0.95)));
            ask(() -> CommonRateDifference.of(some));
        }
    }

    @Test
    void proportionsOfHostileReals() {
        for (double x : REALS) {
            ask(() -> ScoreInterval.wilson(3, 10, x));
            ask(() -> ScoreInterval.wilson(0, 0, x));
            ask(() -> ScoreInterval.newcombe(FULL, x));
            ask(() -> ScoreInterval.miettinenNurminen(FULL, x));
            ask(() -> RateDifference.of(FULL).orElseThrow().wald(x));
            ask(() -> RateRatio.of(FULL).orElseThrow().interval(x));
            ask(() -> CommonOddsRatio.of(List.of(FULL)).orElseThrow().interval(x));
            ask(() -> CommonRateRatio.of(List.of(FULL)).orElseThrow().interval(x));
            ask(() -> CommonRateDifference.of(List.of(FULL)).orElseThrow().satoInterval(x));
            ask(() -> CommonRateDifference.of(List.of(FULL)).orElseThrow().greenlandRobinsInterval(x));
            ask(() -> new ZStatistic(x));
            for (double y : REALS) {
                ask(() -> new RateDifference(x, y));
                ask(() -> new RateRatio(x, OptionalDouble.of(y)));
                ask(() -> new MantelHaenszelTest(x, y));
                ask(() -> new CommonOddsRatio(x, OptionalDouble.of(y)));
                ask(() -> new CommonRateRatio(x, OptionalDouble.of(y)));
                ask(() -> new CommonRateDifference(0.5, x, y));
            }
        }
    }

    @Test
    void ratiosOfHostileUnits() {
        List<UnitSums> sums = new ArrayList<>(List.of(UnitSums.NONE));
        for (long x : COUNTS) {
            for (long y : COUNTS) {
                ask(() -> UnitSums.ofUnit(x, y)).ifPresent(sums::add);
            }
        }
        Random random = new Random(SEED);
        for (int run = 0; run < 1500; run++) {
            UnitSums one = sums.get(random.nextInt(sums.size())).plus(sums.get(random.nextInt(sums.size())));
            UnitSums two = sums.get(random.nextInt(sums.size())).plus(sums.get(random.nextInt(sums.size())));
            ask(() -> RatioEstimate.of(one));
            ask(() -> RatioComparison.of(one, two));
            ask(() -> StratifiedRatioComparison.of(List.of(new RatioStratum(one, two), new RatioStratum(two, one))));
            ask(() -> one.minus(two)).ifPresent(rest -> ask(() -> RatioEstimate.of(rest)));
            BigInteger[] any = new BigInteger[5];
            for (int i = 0; i < any.length; i++) {
                any[i] = BigInteger.valueOf(COUNTS[random.nextInt(COUNTS.length)])
                        .pow(1 + random.nextInt(9));
            }
            long units = COUNTS[random.nextInt(COUNTS.length)];
            ask(() -> new UnitSums(units, any[0], any[1], any[2], any[3], any[4]))
                    .ifPresent(found -> ask(() -> RatioComparison.of(found, one)));
        }
        for (double x : REALS) {
            for (double y : REALS) {
                ask(() -> new RatioEstimate(x, y)).ifPresent(estimate -> {
                    // not products of sums, so what is derived from them may leave the range and must then say so
                    ask(() -> new RatioComparison(estimate, new RatioEstimate(0.5, 0.1), estimate.ratio() - 0.5).z());
                });
            }
        }
    }

    @Test
    void multiplicityOfHostileReals() {
        for (double x : REALS) {
            ask(() -> AdjustedProbability.BONFERRONI.of(x, 0.5));
            ask(() -> AlphaGraph.holm(3).levels(x, Set.of(1)));
            ask(() -> AlphaGraph.holm(2).rejections(0.05, x, 0));
            ask(() -> Dunnett.of(1, 2, 3).oneSidedCriticalValue(x));
            ask(() -> Dunnett.of(1, 2, 3).twoSidedCriticalValue(x));
            ask(() -> Dunnett.of(1, 2, 3).oneSidedTail(x));
            ask(() -> Dunnett.of(1, 2, 3).twoSidedTail(x));
            for (double y : REALS) {
                ask(() -> AdjustedProbability.HOLM.of(x, y));
                ask(() -> Dunnett.of(x, y, y).oneSidedCriticalValue(0.05));
                ask(() -> new AlphaGraph(List.of(x, y), List.of(List.of(0.0, y), List.of(x, 0.0)))
                        .levels(0.05, Set.of(0)));
            }
        }
        for (long count : COUNTS) {
            int size = (int) Math.max(Integer.MIN_VALUE, Math.min(Integer.MAX_VALUE, count));
            ask(() -> AlphaGraph.holm(size));
            ask(() -> AlphaGraph.bonferroni(size));
            ask(() -> AlphaGraph.fixedSequence(size));
            ask(() -> AlphaGraph.holm(4).levels(0.05, Set.of(size)));
        }
        ask(() -> Dunnett.of(1, new double[0]));
        ask(() -> AlphaGraph.holm(200).levels(0.05, Set.of(0, 199)));
        ask(() -> new AlphaGraph(List.of(), List.of()));
    }

    @Test
    void splitsOfHostileSharesAndCounts() {
        Random random = new Random(SEED);
        double[] even = {1, 1};
        for (double x : REALS) {
            for (double y : REALS) {
                double[] shares = {x, y};
                long[] counts = {COUNTS[3 + random.nextInt(5)], COUNTS[2 + random.nextInt(6)]};
                ask(() -> PearsonSplit.of(shares, counts));
                ask(() -> SplitChangePoint.of(shares, List.of(counts, new long[2])));
                ask(() -> WorstSegment.of(shares, Map.of("s", counts)));
            }
            ask(() -> new SplitChangePoint(0, x, List.of()));
            ask(() -> new WorstSegment("s", PearsonSplit.NONE, x, 1));
        }
        for (long a : COUNTS) {
            for (long b : COUNTS) {
                long[] counts = {a, b};
                ask(() -> PearsonSplit.of(even, counts));
                ask(() -> SplitChangePoint.of(even, List.of(counts, new long[] {5, 3}, counts)));
                ask(() -> SplitChangePoint.of(new double[] {1e-90, 1}, List.of(counts, new long[] {0, 0})));
                ask(() -> WorstSegment.of(even, Map.of("s", counts, "t", new long[] {b, a})));
            }
        }
        ask(() -> SplitChangePoint.of(new double[0], List.of()));
        ask(() -> WorstSegment.of(even, Collections.emptyMap()));
    }

    /** The answer, its parts looked at; empty if the arguments were refused in the proper form. */
    private static <T> Optional<T> ask(Supplier<T> question) {
        try {
            T answer = question.get();
            requireNumbers(answer, true);
            return Optional.of(answer);
        } catch (IllegalArgumentException e) {
            assertTrue(
                    e.getMessage() != null && e.getMessage().matches("(?s)[^:]+: .+ \\(expected: .+\\)"),
                    "message: " + e.getMessage());
            return Optional.empty();
        }
    }

    private static void requireNumbers(Object answer, boolean follow) {
        if (answer instanceof Double number) {
            assertTrue(Double.isFinite(number), "a number");
        } else if (answer instanceof double[] numbers) {
            Arrays.stream(numbers).forEach(number -> assertTrue(Double.isFinite(number), "numbers"));
        } else if (answer instanceof Optional<?> optional) {
            optional.ifPresent(value -> requireNumbers(value, follow));
        } else if (answer instanceof OptionalDouble optional) {
            optional.ifPresent(value -> assertTrue(Double.isFinite(value), "a number"));
        } else if (answer instanceof Collection<?> values) {
            values.forEach(value -> requireNumbers(value, follow));
        } else if (answer instanceof Map<?, ?> map) {
            requireNumbers(map.values(), follow);
        } else if (answer instanceof Interval interval) {
            // a ratio of which next to nothing is known may reach beyond a double
            assertTrue(Double.isFinite(interval.lower()) && !Double.isNaN(interval.upper()), interval.toString());
        } else if (answer instanceof Record && follow) {
            requireNumbersOf(answer);
        }
    }

    private static void requireNumbersOf(Object value) {
        for (Method method : value.getClass().getDeclaredMethods()) {
            int modifiers = method.getModifiers();
            if (method.getParameterCount() > 0 || !Modifier.isPublic(modifiers) || Modifier.isStatic(modifiers)) {
                continue;
            }
            try {
                requireNumbers(method.invoke(value), !method.getReturnType().equals(value.getClass()));
            } catch (InvocationTargetException e) {
                if (!(e.getCause() instanceof IllegalArgumentException)) {
                    fail(method + " of " + value, e.getCause());
                }
            } catch (IllegalAccessException | AssertionError e) {
                fail(method.getName() + " of " + value, e);
            }
        }
    }
}
