package io.tallyward.engine.decide;

import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.engine.Plans;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.record.DecisionRecord;
import io.tallyward.engine.record.Verdict;
import java.time.Duration;
import java.util.List;
import java.util.Random;
import org.junit.jupiter.api.BeforeAll;
import org.junit.jupiter.api.Tag;
import org.junit.jupiter.api.Test;

/**
 * A simulation of error rates through the whole deciding side, with fixed seeds: experiments of twenty days with a look
 * every other day, without an effect and with the effect that was planned for. Beside it, on the same data, the habit of
 * peeking every day and stopping at the first |z| above 1.96.
 */
@Tag("simulation")
class ErrorRateSimulationTest {

    private static final int RUNS = 400;
    private static final int RUNS_WITH_EFFECT = 150;
    private static final int DAYS = 20;
    private static final int UNITS_PER_DAY = 400;
    private static final double BASELINE = 0.2;

    /** Chosen such that the planned information is reached about the end of the twentieth day. */
    private static final double EFFECT = 0.0256;

    private static final double ALPHA = 0.05;
    private static final double POWER = 0.8;

    /** A correct program leaves a band of so many standard errors about once in 370 draws. */
    private static final double STANDARD_ERRORS = 3;

    private static final Plan PLAN = Plans.plan("return-prompt")
            .counting(Duration.ofMinutes(30), Duration.ofMinutes(10), Duration.ofDays(1))
            .atMost(Duration.ofDays(DAYS))
            .lookEvery(Duration.ofDays(2))
            .alpha(ALPHA)
            .power(POWER)
            .baseline(BASELINE)
            .smallestEffect(EFFECT)
            .build();

    /** Shares of the runs that ended in each way. */
    private record Rates(double benefit, double harm, double peeking, double looksPerRun) {}

    private static Rates withoutEffect;
    private static Rates withEffect;

    @BeforeAll
    static void simulate() {
        withoutEffect = rates(0, RUNS, 20260504L);
        withEffect = rates(EFFECT, RUNS_WITH_EFFECT, 20260505L);
    }

    private static Rates rates(double effect, int runs, long seed) {
        Random random = new Random(seed);
        int benefits = 0;
        int harms = 0;
        int peeked = 0;
        long looks = 0;
        for (int run = 0; run < runs; run++) {
            DecideShard shard = new DecideShard(List.of(PLAN));
            long[] sums = new long[4];
            boolean crossed = false;
            for (int day = 0; day < DAYS; day++) {
                long[] cells = day(effect, random);
                for (int i = 0; i < sums.length; i++) {
                    sums[i] += cells[i];
                }
                crossed |= Math.abs(pooledZ(sums)) >= 1.959963984540054;
                shard.apply(DecideHost.update(PLAN, 0, 1, day + 1, DecideHost.window(PLAN, day, cells)));
            }
            peeked += crossed ? 1 : 0;
            DecideEffects effects = shard.drain();
            looks += effects.decisions().stream()
                    .filter(record -> record.occasion() == DecisionRecord.Occasion.LOOK)
                    .count();
            Verdict verdict = shard.views().get(PLAN.experiment()).verdict();
            benefits += verdict == Verdict.STOP_BENEFIT ? 1 : 0;
            harms += verdict == Verdict.STOP_HARM ? 1 : 0;
        }
        return new Rates(
                (double) benefits / runs, (double) harms / runs, (double) peeked / runs, (double) looks / runs);
    }

    /** Trials and successes of the control and of the variant; every unit is assigned and clicks by chance. */
    private static long[] day(double effect, Random random) {
        long[] cells = new long[4];
        for (int unit = 0; unit < UNITS_PER_DAY; unit++) {
            int variant = random.nextBoolean() ? 1 : 0;
            cells[2 * variant]++;
            cells[2 * variant + 1] += random.nextDouble() < BASELINE + variant * effect ? 1 : 0;
        }
        return cells;
    }

    private static double pooledZ(long[] sums) {
        double pooled = (double) (sums[1] + sums[3]) / (sums[0] + sums[2]);
        double difference = (double) sums[3] / sums[2] - (double) sums[1] / sums[0];
        return difference / Math.sqrt(pooled * (1 - pooled) * (1.0 / sums[0] + 1.0 / sums[2]));
    }

    private static void assertRate(double expected, double observed, int runs, String what) {
        double tolerance = STANDARD_ERRORS * Math.sqrt(expected * (1 - expected) / runs);
        assertTrue(
                Math.abs(observed - expected) <= tolerance,
                () -> what + ": " + observed + " of " + runs + " runs (expected: " + expected + " give or take "
                        + tolerance + ")");
    }

    @Test
    void stopsWithoutAnEffectAsRarelyAsPromised() {
        assertRate(ALPHA, withoutEffect.benefit() + withoutEffect.harm(), RUNS, "false alarms");
        assertTrue(withoutEffect.looksPerRun() > 9, "looks per run: " + withoutEffect.looksPerRun());
    }

    /** Exact rate for twenty equally spaced looks, by recursive integration; 0.248 in Armitage et al. (1969), recalled. */
    @Test
    void peekingWithAPlainTestRaisesSeveralTimesAsManyFalseAlarms() {
        assertRate(0.2479, withoutEffect.peeking(), RUNS, "false alarms of peeking");
        assertTrue(withoutEffect.peeking() > 3 * (withoutEffect.benefit() + withoutEffect.harm()));
    }

    @Test
    void findsThePlannedEffectWithThePlannedPower() {
        assertRate(POWER, withEffect.benefit(), RUNS_WITH_EFFECT, "benefits found");
        assertTrue(withEffect.harm() <= 0.01, "harms found: " + withEffect.harm());
        assertTrue(withEffect.looksPerRun() < withoutEffect.looksPerRun(), "a benefit ends a run early");
    }
}
