package io.tallyward.engine.decide;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.engine.Plans;
import io.tallyward.engine.plan.AllocationEpoch;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.Spending;
import io.tallyward.engine.plan.Spending.Family;
import io.tallyward.engine.plan.TrustLimits;
import io.tallyward.engine.record.Verdict;
import java.time.Duration;
import java.util.ArrayList;
import java.util.List;
import java.util.Map;
import java.util.Random;
import org.junit.jupiter.api.Test;

/** The level holds where rates move, even so far that the information about the difference falls. Windows are days. */
class ScoreClockTest {

    private static final long SEED = 1954;
    private static final int RUNS = 6_000;

    /** Three Monte Carlo standard errors above the level. */
    private static final double ALLOWED = 0.05 + 3 * Math.sqrt(0.05 * 0.95 / RUNS);

    private static Plans twoDays(Family family) {
        return Plans.plan("quay-banner")
                .counting(Duration.ofMinutes(30), Duration.ofMinutes(10), Duration.ofDays(1))
                .trust(new TrustLimits(0.02, 0.02, 0.05, Duration.ofDays(30)))
                .spending(Spending.of(family))
                .atMost(Duration.ofDays(2));
    }

    private static Plans withAnEpoch(Family family) {
        return twoDays(family)
                .epochs(new AllocationEpoch(Plans.FROM.plus(Duration.ofDays(1)), Map.of("plain", 0.5, "wide", 0.5)));
    }

    /** Share of runs without an effect that stop for benefit or harm; the control's rate is given per day. */
    private static double error(Plan plan, double... rates) {
        Random random = new Random(SEED);
        DecisionMemo memo = new DecisionMemo(0);
        int wrong = 0;
        for (int run = 0; run < RUNS; run++) {
            DecideShard shard = new DecideShard(List.of(plan), memo, Detail.BARE);
            List<Verdict> verdicts = new ArrayList<>();
            for (int day = 0; day < rates.length; day++) {
                shard.apply(DecideHost.update(
                        plan,
                        0,
                        1,
                        day + 1,
                        DecideHost.window(plan, day, 1000, draw(random, rates[day]), 1000, draw(random, rates[day]))));
            }
            shard.drainDecisions().forEach(decision -> verdicts.add(decision.verdict()));
            wrong += verdicts.contains(Verdict.STOP_BENEFIT) || verdicts.contains(Verdict.STOP_HARM) ? 1 : 0;
        }
        return (double) wrong / RUNS;
    }

    private static long draw(Random random, double rate) {
        long successes = 0;
        for (int i = 0; i < 1000; i++) {
            successes += random.nextDouble() < rate ? 1 : 0;
        }
        return successes;
    }

    @Test
    void keepsTheLevelOverEpochsOfUnlikeRates() {
        for (Family family : List.of(Family.POCOCK, Family.OBRIEN_FLEMING)) {
            double error =
                    error(withAnEpoch(family).baseline(0.1).smallestEffect(0.03).build(), 0.1, 0.2);
            assertTrue(error <= ALLOWED, family + ": " + error);
        }
    }

    /** From 0.05 to 0.45 the information about the difference falls although as many units came in again. */
    @Test
    void keepsTheLevelWhereTheInformationFalls() {
        for (Plans plan : List.of(withAnEpoch(Family.POCOCK), twoDays(Family.POCOCK))) {
            double error = error(plan.baseline(0.05).smallestEffect(0.02).build(), 0.05, 0.45);
            assertTrue(error <= ALLOWED, "error " + error);
            assertTrue(error > 0.02, "the last look is taken: " + error);
        }
    }

    @Test
    void saysThatTheInformationFell() {
        Plan plan = twoDays(Family.POCOCK)
                .baseline(0.05)
                .smallestEffect(0.02)
                .atMost(Duration.ofDays(5))
                .build();
        DecideHost host = new DecideHost(plan).next(1000, 50, 1000, 50).next(1000, 450, 1000, 450);
        assertTrue(
                host.view().delayReason().startsWith("the information fraction has fallen from "),
                host.view().delayReason());
        assertEquals(1, host.view().looksTaken());
    }
}
