package io.tallyward.engine;

import io.tallyward.engine.plan.AllocationEpoch;
import io.tallyward.engine.plan.CountRule;
import io.tallyward.engine.plan.CountRule.CountBy;
import io.tallyward.engine.plan.FutilityPlan;
import io.tallyward.engine.plan.LookSchedule;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.Run;
import io.tallyward.engine.plan.Spending;
import io.tallyward.engine.plan.Spending.Family;
import io.tallyward.engine.plan.SplitCheckPlan;
import io.tallyward.engine.plan.Tail;
import io.tallyward.engine.plan.TestPlan;
import io.tallyward.engine.plan.TestPlan.AlphaSharing;
import io.tallyward.engine.plan.TestPlan.Better;
import io.tallyward.engine.plan.TestPlan.InformationMeasure;
import io.tallyward.engine.plan.TestPlan.Sides;
import io.tallyward.engine.plan.TestPlan.SpendingClock;
import io.tallyward.engine.plan.TrustLimits;
import io.tallyward.engine.plan.Variant;
import java.time.Duration;
import java.time.Instant;
import java.util.List;
import java.util.Optional;

/**
 * Builds plans of Northwater's experiments. What a test does not set is that of {@code quay-banner}: windows of 5 minutes,
 * attribution 30, grace 10, so that the window [0, 5) is sealed when the watermark reaches minute 45.
 */
public final class Plans {

    /** Start of every run. */
    public static final Instant FROM = Instant.parse("2026-05-04T00:00:00Z");

    private final String experiment;
    private CountRule count =
            new CountRule(CountBy.UNIT, Duration.ofMinutes(30), Duration.ofMinutes(10), Duration.ofMinutes(5));
    private List<Variant> variants = List.of(new Variant("plain", 0.5, true), new Variant("wide", 0.5, false));
    private double alpha = 0.05;
    private Sides sides = Sides.TWO;
    private Optional<Tail> benefit = Optional.empty();
    private Optional<Tail> harm = Optional.empty();
    private AlphaSharing sharing = AlphaSharing.PASS_ON;
    private SpendingClock clock = SpendingClock.INFORMATION;
    private InformationMeasure measure = InformationMeasure.OBSERVED;
    private double power = 0.8;
    private double baseline = 0.2;
    private double smallestEffect = 0.02;
    private Spending spending = Spending.of(Family.OBRIEN_FLEMING);
    private Better better = Better.HIGHER;
    private LookSchedule looks = new LookSchedule.Every(Duration.ofDays(1));
    private Optional<FutilityPlan> futility = Optional.empty();
    private TrustLimits trust = TrustLimits.DEFAULT;
    private Duration atLeast = Duration.ZERO;
    private Duration atMost = Duration.ofDays(5);
    private List<AllocationEpoch> epochs = List.of();
    private List<String> segments = List.of();

    private Plans(String experiment) {
        this.experiment = experiment;
    }

    public static Plans plan(String experiment) {
        return new Plans(experiment);
    }

    public Plans counting(Duration attribution, Duration grace, Duration window) {
        count = new CountRule(CountBy.UNIT, attribution, grace, window);
        return this;
    }

    /** Counts units, with the attribution, grace and windows set so far. */
    public Plans byUnit() {
        count = new CountRule(CountBy.UNIT, count.attribution(), count.grace(), count.window());
        return this;
    }

    /** Counts views, with the attribution, grace and windows set so far. */
    public Plans byView() {
        count = new CountRule(CountBy.VIEW, count.attribution(), count.grace(), count.window());
        return this;
    }

    public Plans variants(Variant... all) {
        variants = List.of(all);
        return this;
    }

    public Plans alpha(double value) {
        alpha = value;
        return this;
    }

    public Plans sides(Sides value) {
        sides = value;
        return this;
    }

    public Plans power(double value) {
        power = value;
        return this;
    }

    public Plans baseline(double value) {
        baseline = value;
        return this;
    }

    public Plans smallestEffect(double value) {
        smallestEffect = value;
        return this;
    }

    public Plans spending(Spending value) {
        spending = value;
        return this;
    }

    public Plans better(Better value) {
        better = value;
        return this;
    }

    public Plans lookEvery(Duration interval) {
        looks = new LookSchedule.Every(interval);
        return this;
    }

    public Plans lookAt(Double... fractions) {
        looks = new LookSchedule.AtFractions(List.of(fractions));
        return this;
    }

    public Plans futility(Spending value) {
        return futility(new FutilityPlan.ErrorSpending(value));
    }

    public Plans futility(FutilityPlan value) {
        futility = Optional.of(value);
        return this;
    }

    public Plans benefit(Tail value) {
        benefit = Optional.of(value);
        return this;
    }

    public Plans harm(Tail value) {
        harm = Optional.of(value);
        return this;
    }

    public Plans sharing(AlphaSharing value) {
        sharing = value;
        return this;
    }

    public Plans clock(SpendingClock value) {
        clock = value;
        return this;
    }

    public Plans measure(InformationMeasure value) {
        measure = value;
        return this;
    }

    public Plans trust(TrustLimits value) {
        trust = value;
        return this;
    }

    public Plans atLeast(Duration value) {
        atLeast = value;
        return this;
    }

    public Plans atMost(Duration value) {
        atMost = value;
        return this;
    }

    public Plans epochs(AllocationEpoch... changes) {
        epochs = List.of(changes);
        return this;
    }

    public Plans segments(String... fields) {
        segments = List.of(fields);
        return this;
    }

    public Plan build() {
        return new Plan(
                experiment,
                "does the variant bring more timetable clicks?",
                "web-growth@northwater.example",
                count,
                variants,
                new TestPlan(
                        benefit.orElse(even()),
                        sides == Sides.TWO ? Optional.of(harm.orElse(even())) : Optional.empty(),
                        sharing,
                        clock,
                        measure,
                        power,
                        baseline,
                        smallestEffect,
                        better,
                        TestPlan.DEFAULT_MINIMUM_PER_CELL),
                looks,
                futility,
                new SplitCheckPlan(SplitCheckPlan.DEFAULT_ALPHA, segments),
                trust,
                new Run(FROM, atLeast, atMost),
                epochs);
    }

    private Tail even() {
        return Tail.of(sides == Sides.TWO ? alpha / 2 : alpha, spending);
    }
}
