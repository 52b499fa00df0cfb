package io.tallyward.engine.decide;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertNotNull;
import static org.junit.jupiter.api.Assertions.assertNull;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.engine.Plans;
import io.tallyward.engine.plan.FutilityPlan;
import io.tallyward.engine.plan.FutilityPlan.Assumption;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.Spending;
import io.tallyward.engine.plan.Spending.Family;
import io.tallyward.engine.plan.Tail;
import io.tallyward.engine.plan.TestPlan.Better;
import io.tallyward.engine.plan.TrustLimits;
import io.tallyward.engine.record.Adjusted;
import io.tallyward.engine.record.DecisionRecord;
import io.tallyward.engine.record.DecisionRecord.Comparison;
import io.tallyward.engine.record.Outlook;
import io.tallyward.engine.record.Verdict;
import io.tallyward.statistics.boundary.BoundarySequence;
import io.tallyward.statistics.spending.SpendingFunction;
import java.time.Duration;
import java.util.ArrayList;
import java.util.List;
import java.util.Map;
import java.util.Random;
import java.util.TreeMap;
import org.apache.commons.math3.distribution.NormalDistribution;
import org.junit.jupiter.api.Test;

/** What a record says about the effect: adjusted once a comparison has ended, an outlook while it goes on. */
class EstimatesTest {

    private static final NormalDistribution NORMAL = new NormalDistribution();

    /** Of closed forms in Commons Math's normal distribution, whose quantiles are good to about 1e-9. */
    private static final double CLOSED_FORM = 1e-8;

    private static Plans days() {
        return Plans.plan("quay-banner")
                .counting(Duration.ofMinutes(30), Duration.ofMinutes(10), Duration.ofDays(1))
                .trust(new TrustLimits(0.02, 0.02, 0.05, Duration.ofDays(30)));
    }

    /** At a first look the stage-wise ordering is that of z: the textbook p-value and interval of a single look. */
    @Test
    void isTheTextbookAtAFirstLook() {
        Comparison look =
                new DecideHost(days().build()).next(5000, 900, 5000, 1100).lastLook();
        assertEquals(Verdict.STOP_BENEFIT, look.verdict());
        Adjusted adjusted = look.adjusted();
        assertEquals(2 * (1 - NORMAL.cumulativeProbability(look.z())), adjusted.pValue(), CLOSED_FORM);
        assertEquals(look.difference(), adjusted.difference().value(), CLOSED_FORM);
        double half = NORMAL.inverseCumulativeProbability(0.975) / Math.sqrt(look.information());
        assertEquals(look.difference() - half, adjusted.difference().lower(), CLOSED_FORM);
        assertEquals(look.difference() + half, adjusted.difference().upper(), CLOSED_FORM);
        assertEquals(look.difference() / (900 / 5000.0), adjusted.lift().value(), CLOSED_FORM);
        assertEquals(0.95, adjusted.level(), 1e-15);
        assertNull(look.outlook(), "nothing lies ahead of a stop for benefit");
    }

    @Test
    void agreesWithTheVerdictAfterAnyLook() {
        Random random = new Random(20261201);
        int crossed = 0;
        int ended = 0;
        for (int run = 0; run < 60; run++) {
            Plans plan = days().spending(Spending.of(Family.POCOCK));
            if (run % 3 == 1) {
                plan.harm(Tail.of(0.01, Spending.of(Family.POCOCK))).benefit(Tail.of(0.04, Spending.of(Family.POCOCK)));
            }
            if (run % 2 == 1) {
                plan.better(Better.LOWER);
            }
            Comparison last = lastOf(plan.build(), random);
            Adjusted adjusted = last.adjusted();
            boolean stopped = last.verdict() == Verdict.STOP_BENEFIT || last.verdict() == Verdict.STOP_HARM;
            assertEquals(stopped, adjusted.pValue() <= last.level(), "run " + run + ": " + last);
            boolean outside =
                    adjusted.difference().lower() > 0 || adjusted.difference().upper() < 0;
            assertEquals(stopped, outside, "run " + run + ": " + last);
            assertTrue(adjusted.difference().lower() < adjusted.difference().value());
            assertTrue(adjusted.difference().value() < adjusted.difference().upper());
            crossed += stopped ? 1 : 0;
            ended++;
        }
        assertTrue(crossed > 15 && crossed < ended - 15, "both kinds of end: " + crossed + " of " + ended);
    }

    private static Comparison lastOf(Plan plan, Random random) {
        DecideHost host = new DecideHost(plan);
        double rate = 0.2 + 0.02 * random.nextGaussian();
        while (host.decisions().isEmpty() || !host.view().verdict().settled()) {
            host.next(1000, binomial(random, 0.2), 1000, binomial(random, rate));
        }
        return host.lastLook();
    }

    private static long binomial(Random random, double rate) {
        return Math.round(1000 * rate + random.nextGaussian() * Math.sqrt(1000 * rate * (1 - rate)));
    }

    /** A futility stop comes because z is low; "as if it had been the last look" would be one more look for harm. */
    @Test
    void givesNoAdjustedEstimateAfterFutility() {
        Comparison look = new DecideHost(
                        days().futility(Spending.of(Family.POCOCK)).build())
                .next(1000, 200, 1000, 175)
                .lastLook();
        assertEquals(Verdict.STOP_FUTILITY, look.verdict());
        assertNull(look.adjusted());
        assertNotNull(look.differenceLower());
        assertNotNull(look.outlook());
    }

    @Test
    void foreseesNothingAfterTheBenefitTailHasSpentAll() {
        Plan plan = days().benefit(Tail.of(0.025, Spending.table(new TreeMap<>(Map.of(0.1, 1.0, 1.0, 1.0)))))
                .futility(new FutilityPlan.PredictivePower(0.2))
                .build();
        Comparison look = new DecideHost(plan)
                .next(10000, 2000, 10000, 2000)
                .next(10000, 2000, 10000, 2000)
                .lastLook();
        assertNull(look.futility(), look.toString());
        assertNull(look.outlook());
        assertEquals(Verdict.CONTINUE, look.verdict());
    }

    /** The closed forms of conditional and predictive power, as in the reference file's conventions. */
    @Test
    void foreseesTheEndByTheClosedForms() {
        Plan plan = days().build();
        DecideHost host = new DecideHost(plan).next(1000, 200, 1000, 215).next(1000, 200, 1000, 215);
        Comparison look = host.lastLook();
        PlanDesign design = PlanDesign.of(plan, plan.challengers().get(0));
        double t = look.informationFraction();
        double c = criticalAfter(plan, host, design);
        Outlook outlook = look.outlook();
        assertEquals(conditional(t, look.z(), c, look.z() / Math.sqrt(t)), outlook.underTrend(), CLOSED_FORM);
        assertEquals(conditional(t, look.z(), c, design.drift()), outlook.underDesign(), CLOSED_FORM);
        assertEquals(conditional(t, look.z(), c, 0), outlook.withoutEffect(), CLOSED_FORM);
        assertEquals(
                NORMAL.cumulativeProbability((look.z() / Math.sqrt(t) - c) * Math.sqrt(t / (1 - t))),
                outlook.predictive(),
                CLOSED_FORM);
    }

    private static double conditional(double t, double z, double c, double drift) {
        return NORMAL.cumulativeProbability((z * Math.sqrt(t) + drift * (1 - t) - c) / Math.sqrt(1 - t));
    }

    private static double criticalAfter(Plan plan, DecideHost host, PlanDesign design) {
        BoundarySequence sequence = new BoundarySequence();
        SpendingFunction spending = SpendingFunctions.of(plan.test().benefit());
        for (DecisionRecord record : host.decisions()) {
            double fraction = record.comparisons().get(0).informationFraction();
            sequence.next(
                    fraction,
                    spending.spent(design.benefitLevel(), fraction),
                    spending.spent(design.harmLevel(), fraction));
        }
        return sequence.next(1, design.benefitLevel(), design.harmLevel()).upper();
    }

    @Test
    void givesUpWhereTheForeseenPowerFallsBelowTheThreshold() {
        List<FutilityPlan> rules = List.of(
                new FutilityPlan.ConditionalPower(0.3, Assumption.TREND),
                new FutilityPlan.ConditionalPower(0.3, Assumption.DESIGN),
                new FutilityPlan.ConditionalPower(0.3, Assumption.NONE),
                new FutilityPlan.PredictivePower(0.3));
        for (FutilityPlan rule : rules) {
            for (long successes = 190; successes <= 230; successes += 4) {
                Comparison look = new DecideHost(days().futility(rule).build())
                        .next(1000, 200, 1000, successes)
                        .lastLook();
                double power = power(rule, look.outlook());
                assertEquals(
                        power < 0.3 ? Verdict.STOP_FUTILITY : Verdict.CONTINUE,
                        look.verdict(),
                        rule + " with " + power + ": " + look);
                assertEquals(power < 0.3, look.z() < look.futility(), rule.toString());
            }
        }
    }

    private static double power(FutilityPlan rule, Outlook outlook) {
        if (rule instanceof FutilityPlan.ConditionalPower conditional) {
            return switch (conditional.under()) {
                case TREND -> outlook.underTrend();
                case DESIGN -> outlook.underDesign();
                case NONE -> outlook.withoutEffect();
            };
        }
        return outlook.predictive();
    }

    @Test
    void decidesTheSameInBareRecordsAndWithAMemo() {
        Plan plan = days().futility(new FutilityPlan.PredictivePower(0.05)).build();
        DecisionMemo memo = new DecisionMemo(100);
        for (int again = 0; again < 2; again++) {
            List<DecisionRecord> full = decisions(plan, new DecisionMemo(0), Detail.FULL);
            assertEquals(full, decisions(plan, memo, Detail.FULL), "a memo changes nothing");
            assertEquals(plan, full.remove(0).plan(), "a bare record has no chain that would need the plan");
            List<DecisionRecord> bare = decisions(plan, memo, Detail.BARE);
            assertEquals(full.size(), bare.size());
            for (int i = 0; i < full.size(); i++) {
                Comparison look = bare.get(i).comparisons().get(0);
                assertEquals(full.get(i).comparisons().get(0).verdict(), look.verdict());
                assertEquals(full.get(i).comparisons().get(0).upper(), look.upper());
                assertNull(look.outlook());
                assertNull(look.adjusted());
            }
            assertNotNull(full.get(full.size() - 1).comparisons().get(0).adjusted());
        }
    }

    private static List<DecisionRecord> decisions(Plan plan, DecisionMemo memo, Detail detail) {
        DecideShard shard = new DecideShard(List.of(plan), memo, detail);
        List<DecisionRecord> decisions = new ArrayList<>();
        for (int day = 0; day < 5; day++) {
            shard.apply(DecideHost.update(
                    plan, 0, 1, day + 1, DecideHost.window(plan, day, 1000, 200, 1000, 212 + 3L * day)));
            decisions.addAll(shard.drain().decisions());
        }
        return decisions;
    }
}
