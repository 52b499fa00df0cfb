package io.tallyward.engine.verify;

import io.tallyward.engine.Plans;
import io.tallyward.engine.count.Outcome;
import io.tallyward.engine.count.OutcomeCounts;
import io.tallyward.engine.plan.AllocationEpoch;
import io.tallyward.engine.plan.Amendment;
import io.tallyward.engine.plan.FutilityPlan;
import io.tallyward.engine.plan.FutilityPlan.Assumption;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.Spending;
import io.tallyward.engine.plan.Spending.Family;
import io.tallyward.engine.plan.Tail;
import io.tallyward.engine.plan.TestPlan.Better;
import io.tallyward.engine.plan.TestPlan.InformationMeasure;
import io.tallyward.engine.plan.TestPlan.Sides;
import io.tallyward.engine.plan.TestPlan.SpendingClock;
import io.tallyward.engine.plan.Variant;
import io.tallyward.engine.record.DecisionRecord;
import java.time.Duration;
import java.util.LinkedHashMap;
import java.util.List;
import java.util.Map;

/** Logs of every shape, by what is special about them; each of an experiment of its own. */
public final class RecordedRuns {

    private static final OutcomeCounts LATE = new OutcomeCounts.Builder()
            .add(Outcome.LATE, 60)
            .add(Outcome.REPEAT, 5)
            .build();
    private static final OutcomeCounts CROSSED = new OutcomeCounts.Builder()
            .add(Outcome.CROSSOVER, 60)
            .add(Outcome.ORPHAN, 3)
            .build();
    private static final OutcomeCounts ORPHANED = new OutcomeCounts.Builder()
            .add(Outcome.ORPHAN, 110)
            .addOrphans(0, 10)
            .addOrphans(1, 100)
            .build();
    private static final double[] EVEN = {0.5, 0.5};

    private RecordedRuns() {}

    private static Plans hourly(String experiment) {
        return Plans.plan(experiment)
                .counting(Duration.ofMinutes(30), Duration.ofMinutes(10), Duration.ofHours(1))
                .lookEvery(Duration.ofHours(6))
                .atMost(Duration.ofDays(3));
    }

    private static Variant[] three() {
        return new Variant[] {
            new Variant("plain", 0.4, true), new Variant("wide", 0.3, false), new Variant("tall", 0.3, false)
        };
    }

    /** All of them. */
    public static Map<String, List<DecisionRecord>> all() {
        Map<String, List<DecisionRecord>> runs = new LinkedHashMap<>();
        runs.put(
                "benefit",
                run(hourly("quay-banner").build(), 1).next(72, 400, 0.2, 0.23).records());
        runs.put(
                "harm, lower is better, calendar clock, trials as measure",
                run(
                                hourly("late-gate")
                                        .better(Better.LOWER)
                                        .clock(SpendingClock.CALENDAR)
                                        .measure(InformationMeasure.TRIALS)
                                        .harm(Tail.of(0.02, Spending.of(Family.POCOCK)))
                                        .build(),
                                2)
                        .next(72, 300, 0.2, 0.24)
                        .records());
        runs.put(
                "exhausted, at fractions, with a quiet end",
                run(
                                hourly("deck-map")
                                        .lookAt(0.25, 0.5, 0.75, 1.0)
                                        .sides(Sides.ONE)
                                        .build(),
                                3)
                        .next(60, 100, 0.2, 0.2)
                        .idle(3)
                        .quiet(9)
                        .records());
        runs.put(
                "futility by spending",
                run(
                                hourly("meal-offer")
                                        .futility(new Spending(Family.HWANG_SHIH_DECANI, -2))
                                        .build(),
                                4)
                        .next(72, 400, 0.2, 0.19)
                        .records());
        runs.put(
                "futility by conditional power",
                run(
                                hourly("pier-clock")
                                        .futility(new FutilityPlan.ConditionalPower(0.1, Assumption.TREND))
                                        .build(),
                                5)
                        .next(72, 400, 0.2, 0.195)
                        .records());
        runs.put(
                "too few to look at",
                run(hourly("lounge-sign").build(), 13)
                        .next(72, 10, 0.002, 0.002)
                        .records());
        runs.put(
                "amended: another split, then a later end",
                run(
                                hourly("berth-list")
                                        .lookEvery(Duration.ofHours(16))
                                        .segments("release")
                                        .build(),
                                14)
                        .next(10, 300, 0.2, 0.21)
                        .amend(4, "the first days were quiet", new Amendment.Shares(Map.of("plain", 0.3, "wide", 0.7)))
                        .next(20, 300, 0.2, 0.21)
                        .amend(2, "more time is needed", new Amendment.End(Plans.FROM.plus(Duration.ofDays(4))))
                        .next(66, 30, 0.2, 0.21)
                        .records());
        runs.put(
                "amended: an earlier end",
                run(hourly("tide-table").build(), 15)
                        .next(20, 100, 0.2, 0.2)
                        .amend(2, "the season is over", new Amendment.End(Plans.FROM.plus(Duration.ofHours(40))))
                        .next(20, 100, 0.2, 0.2)
                        .records());
        runs.put(
                "stopped by the owner",
                run(hourly("gull-poster").variants(three()).build(), 16)
                        .next(20, 100, 0.2, 0.2, 0.2)
                        .amend(3, "a complaint", new Amendment.Stop())
                        .next(4, 100, 0.2, 0.2, 0.2)
                        .records());
        runs.put("mismatch by segment", mismatch());
        runs.put("held and told", held());
        runs.put("late and crossed", complaints());
        runs.put("orphans of one variant", orphans());
        runs.put(
                "several challengers that pass on",
                run(hourly("fare-chip").variants(three()).segments("release").build(), 8)
                        .next(72, 600, 0.2, 0.25, 0.22)
                        .records());
        runs.put(
                "a ramp",
                run(
                                hourly("return-prompt")
                                        .lookEvery(Duration.ofHours(12))
                                        .epochs(
                                                new AllocationEpoch(
                                                        Plans.FROM.plus(Duration.ofHours(20)),
                                                        Map.of("plain", 0.8, "wide", 0.2)),
                                                new AllocationEpoch(
                                                        Plans.FROM.plus(Duration.ofHours(40)),
                                                        Map.of("plain", 0.5, "wide", 0.5)))
                                        .build(),
                                9)
                        .next(20, 300, 0.2, 0.215)
                        .next(20, 300, 0.2, 0.215)
                        .next(32, 300, 0.2, 0.215)
                        .records());
        runs.put(
                "views",
                run(hourly("cabin-upsell").byView().atLeast(Duration.ofDays(1)).build(), 10)
                        .next(72, 200, 0.2, 0.23)
                        .records());
        runs.put(
                "views by several challengers",
                run(hourly("route-tip").byView().variants(three()).build(), 11)
                        .next(72, 300, 0.2, 0.2, 0.25)
                        .records());
        return runs;
    }

    private static RecordedRun run(Plan plan, long seed) {
        return new RecordedRun(plan, seed);
    }

    private static List<DecisionRecord> mismatch() {
        return run(hourly("crew-page").segments("release").build(), 6)
                .next(10, 400, 0.2, 0.23)
                .next(20, 400, OutcomeCounts.NONE, new double[] {0.5, 0.38}, 0.2, 0.23)
                .next(42, 400, 0.2, 0.24)
                .records();
    }

    private static List<DecisionRecord> held() {
        return run(hourly("night-fare").build(), 7)
                .next(11, 3000, 0.2, 0.26)
                .next(9, 6, OutcomeCounts.NONE, new double[] {1, 0}, 0.2, 0.26)
                .next(3, 20, 0.2, 0.26)
                .quiet(10)
                .records();
    }

    private static List<DecisionRecord> orphans() {
        return run(hourly("pier-lights").build(), 15)
                .next(10, 3000, 0.2, 0.2)
                .next(6, 3000, ORPHANED, EVEN, 0.2, 0.2)
                .next(50, 3000, 0.2, 0.2)
                .records();
    }

    private static List<DecisionRecord> complaints() {
        return run(hourly("harbour-news").build(), 12)
                .next(8, 300, 0.2, 0.2)
                .next(8, 300, LATE, EVEN, 0.2, 0.2)
                .next(6, 300, CROSSED, EVEN, 0.2, 0.2)
                .next(10, 3000, 0.2, 0.2)
                .quiet(8)
                .next(10, 300, 0.2, 0.21)
                .records();
    }
}
