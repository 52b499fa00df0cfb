package io.tallyward.statistics;

import static org.junit.jupiter.api.Assertions.assertFalse;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.statistics.boundary.BoundarySequence;
import io.tallyward.statistics.boundary.ClassicalConstants;
import io.tallyward.statistics.boundary.DriftForPower;
import io.tallyward.statistics.boundary.ExitProbabilities;
import io.tallyward.statistics.boundary.Look;
import io.tallyward.statistics.inference.ConditionalPower;
import io.tallyward.statistics.inference.EffectScale;
import io.tallyward.statistics.inference.Estimate;
import io.tallyward.statistics.inference.Interval;
import io.tallyward.statistics.inference.LiftScale;
import io.tallyward.statistics.inference.RepeatedInterval;
import io.tallyward.statistics.inference.StagewiseInference;
import io.tallyward.statistics.spending.SpendingFunction;
import java.util.ArrayList;
import java.util.Arrays;
import java.util.List;
import java.util.Random;
import java.util.function.Supplier;
import java.util.regex.Pattern;
import org.junit.jupiter.api.Test;

/**
 * Whatever is passed, there is an answer without NaN or an IllegalArgumentException that names the argument, its value and
 * what was expected. Arguments are drawn, by fixed seeds, from what breaks formulas and from what is usual.
 */
class HostileArgumentsTest {

    private static final double INFINITE = Double.POSITIVE_INFINITY;

    private static final double[] HOSTILE = {
        Double.NaN,
        INFINITE,
        -INFINITE,
        Double.MAX_VALUE,
        -Double.MAX_VALUE,
        Double.MIN_VALUE,
        1e300,
        -1e300,
        1e-300,
        1e150,
        1e-150,
        -1e6,
        1e6,
        1e7,
        -0.0,
        0
    };
    private static final double[] INFORMATION = {1e-100, 1e-12, 0.01, 0.2, 0.5, 0.55, 0.9, 1, 1.3, 1e6};
    private static final double[] STATISTICS = {-1e6, -50, -3, -0.5, 0, 0.7, 2, 2.9, 8, 39, 1e4, 1e6};
    private static final double[] PROBABILITIES = {1e-300, 1e-100, 1e-12, 0.001, 0.025, 0.2, 0.5, 0.9, 1 - 1e-16, 1};

    private static final Pattern MESSAGE = Pattern.compile(".+: .+ \\(expected: .+\\)");

    private final Random random = new Random(20);

    @Test
    void stagewiseInferenceAnswersOrSaysWhy() {
        for (int run = 0; run < 600; run++) {
            double z = from(STATISTICS);
            double level = from(PROBABILITIES);
            double drift = from(STATISTICS);
            Answers answers = new Answers("run " + run + ", z " + z + ", level " + level + ", drift " + drift);
            List<Look> looks = answers.take(() -> looks(answers));
            if (looks != null) {
                answers.take(() -> report(answers, StagewiseInference.of(looks, z), level, drift));
                answers.take(() -> answers.interval(RepeatedInterval.at(looks.get(looks.size() - 1), z, level)));
            }
        }
    }

    private static Object report(Answers answers, StagewiseInference stop, double level, double drift) {
        answers.probability(stop.pUpper());
        answers.probability(stop.pLower());
        answers.probability(stop.pReported(true));
        answers.number(stop.naiveDrift());
        answers.take(() -> answers.probability(stop.pUpper(drift)));
        return answers.take(() -> {
            Estimate estimate = stop.estimate(level);
            answers.number(estimate.value());
            return answers.interval(estimate.interval());
        });
    }

    @Test
    void conditionalPowerAnswersOrSaysWhy() {
        for (int run = 0; run < 4000; run++) {
            double[] t = ascending(random.nextInt(5));
            double[] upper = bounds(t.length);
            double[] lower = bounds(t.length);
            double now = from(INFORMATION);
            double z = from(STATISTICS);
            double drift = from(STATISTICS);
            Answers answers = new Answers("run " + run + ", at " + now + ", " + z + ", under " + drift + ", "
                    + Arrays.toString(t) + Arrays.toString(upper) + Arrays.toString(lower));
            answers.take(() -> {
                ConditionalPower power = ConditionalPower.of(now, z, t, upper, lower);
                answers.number(power.trend());
                answers.probability(power.withoutEffect());
                answers.take(() -> answers.probability(power.underTrend()));
                answers.take(() -> answers.probability(power.under(drift)));
                return answers.take(() -> answers.probability(power.predictive()));
            });
        }
    }

    @Test
    void boundariesAnswerOrSayWhy() {
        for (int run = 0; run < 1500; run++) {
            BoundarySequence sequence = new BoundarySequence();
            Answers answers = new Answers("run " + run);
            double[] t = ascending(4);
            for (double at : t) {
                double upper = from(PROBABILITIES);
                double lower = random.nextBoolean() ? upper : from(PROBABILITIES);
                answers.take(() -> {
                    Look look = sequence.next(at, upper, lower);
                    answers.number(look.upper());
                    return answers.number(look.lower());
                });
            }
            double[] upper = bounds(t.length);
            double[] lower = bounds(t.length);
            double drift = 0.01 * from(STATISTICS);
            answers.take(() -> {
                ExitProbabilities exits = ExitProbabilities.of(t, upper, lower, drift);
                answers.number(exits.expectedInformation());
                answers.probability(Math.min(1, exits.totalUpper()));
                return answers.probability(Math.min(1, exits.totalLower()));
            });
            double power = from(PROBABILITIES);
            answers.take(() -> answers.number(DriftForPower.of(t, upper, lower, power)));
        }
    }

    @Test
    void classicalConstantsAnswerOrSayWhy() {
        int[] counts = {Integer.MIN_VALUE, -1, 0, 1, 2, 7, 31, 201, Integer.MAX_VALUE};
        double[] levels = {1e-300, 1e-12, 1e-9, 0.05, 0.5, 0.6, 1, Double.NaN, INFINITE, -1};
        for (ClassicalConstants test : ClassicalConstants.values()) {
            for (int looks : counts) {
                for (double alpha : levels) {
                    Answers answers = new Answers(test + ", " + looks + " looks at " + alpha);
                    answers.take(() -> answers.number(test.constant(looks, alpha)));
                    answers.take(() -> answers.number(test.drift(looks, alpha, from(PROBABILITIES))));
                }
            }
        }
    }

    @Test
    void spendingAnswersOrSaysWhy() {
        for (int run = 0; run < 5000; run++) {
            double[] fractions = ascending(1 + random.nextInt(4));
            double[] shares = new double[fractions.length];
            Arrays.setAll(shares, i -> from(PROBABILITIES));
            Arrays.sort(shares);
            if (random.nextBoolean()) {
                fractions[fractions.length - 1] = 1;
                shares[shares.length - 1] = 1;
            }
            double start = from(INFORMATION);
            double level = from(PROBABILITIES);
            double at = from(INFORMATION);
            Answers answers = new Answers("run " + run + ", " + Arrays.toString(fractions) + Arrays.toString(shares)
                    + ", start " + start + ", level " + level + ", at " + at);
            SpendingFunction table = answers.take(() -> SpendingFunction.table(fractions, shares));
            SpendingFunction base = table == null ? SpendingFunction.obrienFlemingType() : table;
            answers.take(() -> answers.probability(base.spent(level, at)));
            answers.take(() -> answers.probability(base.startingAt(start).spent(level, at)));
        }
    }

    @Test
    void scalesAnswerOrSayWhy() {
        for (int run = 0; run < 5000; run++) {
            double value = from(STATISTICS);
            double end = from(STATISTICS);
            double level = from(PROBABILITIES);
            double rate = from(PROBABILITIES);
            double variance = from(PROBABILITIES);
            double information = from(INFORMATION);
            Answers answers = new Answers("run " + run + ", " + value + ", " + end + ", level " + level + ", rate "
                    + rate + ", variance " + variance + ", information " + information);
            answers.take(() -> {
                Interval interval = answers.interval(new Interval(Math.min(value, end), INFINITE, level));
                Estimate difference = new EffectScale(information).riskDifference(new Estimate(value, interval));
                answers.interval(difference.interval());
                Estimate lift = new LiftScale(rate, variance, 1e-5).lift(difference);
                answers.number(lift.value());
                return answers.interval(lift.interval());
            });
            answers.take(() -> answers.number(new EffectScale(information).drift(value)));
        }
    }

    /** More looks than anybody takes, and a statistic that says nothing. */
    @Test
    void answersAfterHundredsOfLooks() {
        Answers answers = new Answers("400 looks");
        BoundarySequence sequence = new BoundarySequence();
        List<Look> looks = new ArrayList<>();
        for (int k = 1; k <= 400; k++) {
            double spent = SpendingFunction.pocockType().spent(0.025, k / 400.0);
            looks.add(sequence.next(k / 400.0, spent, spent));
        }
        answers.probability(StagewiseInference.of(looks, 0).pReported(true));
    }

    private List<Look> looks(Answers answers) {
        double[] t = ascending(random.nextInt(5));
        double[] upper = bounds(t.length);
        List<Look> looks = new ArrayList<>();
        for (int k = 0; k < t.length; k++) {
            double lower = random.nextInt(3) > 0 ? -Math.abs(upper[k]) : from(STATISTICS);
            looks.add(new Look(k + 1, t[k], 1e-300, 0, upper[k], lower));
        }
        answers.mention(looks);
        if (looks.isEmpty()) {
            throw new IllegalArgumentException("looks: none (expected: for the other checks, at least one)");
        }
        return looks;
    }

    /** Mostly in order, sometimes not. */
    private double[] ascending(int count) {
        double[] t = new double[count];
        Arrays.setAll(t, i -> from(INFORMATION));
        if (random.nextInt(8) > 0) {
            Arrays.sort(t);
        }
        return t;
    }

    private double[] bounds(int count) {
        double[] bounds = new double[count];
        Arrays.setAll(bounds, i -> random.nextInt(6) == 0 ? INFINITE : from(STATISTICS));
        return bounds;
    }

    private double from(double[] usual) {
        double[] pool = random.nextInt(20) == 0 ? HOSTILE : usual;
        return pool[random.nextInt(pool.length)];
    }

    /** Watches what comes back. */
    private static final class Answers {

        private String where;

        Answers(String where) {
            this.where = where;
        }

        void mention(Object more) {
            where = where + ", " + more;
        }

        /** The answer, or null if it was refused properly. */
        <T> T take(Supplier<T> call) {
            try {
                return call.get();
            } catch (IllegalArgumentException e) {
                assertTrue(MESSAGE.matcher(e.getMessage()).matches(), where + ": " + e);
                return null;
            }
        }

        double number(double value) {
            assertFalse(Double.isNaN(value), where);
            return value;
        }

        double probability(double value) {
            assertTrue(value >= 0 && value <= 1, where + ": " + value);
            return value;
        }

        Interval interval(Interval interval) {
            assertTrue(interval.lower() <= interval.upper(), where + ": " + interval);
            return interval;
        }
    }
}
