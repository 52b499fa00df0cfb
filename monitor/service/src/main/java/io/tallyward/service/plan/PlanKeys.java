package io.tallyward.service.plan;

import static io.tallyward.service.config.document.ScalarType.duration;
import static io.tallyward.service.config.document.ScalarType.flag;
import static io.tallyward.service.config.document.ScalarType.instant;
import static io.tallyward.service.config.document.ScalarType.matching;
import static io.tallyward.service.config.document.ScalarType.name;
import static io.tallyward.service.config.document.ScalarType.number;
import static io.tallyward.service.config.document.ScalarType.numberBetween;
import static io.tallyward.service.config.document.ScalarType.oneOf;
import static io.tallyward.service.config.document.ScalarType.share;
import static io.tallyward.service.config.document.ScalarType.text;
import static io.tallyward.service.config.document.ScalarType.wholeNumber;

import io.tallyward.engine.plan.AmendmentRules;
import io.tallyward.engine.plan.CountRule.CountBy;
import io.tallyward.engine.plan.FutilityPlan.Assumption;
import io.tallyward.engine.plan.Spending;
import io.tallyward.engine.plan.SplitCheckPlan;
import io.tallyward.engine.plan.TestPlan;
import io.tallyward.engine.plan.TestPlan.AlphaSharing;
import io.tallyward.engine.plan.TestPlan.Better;
import io.tallyward.engine.plan.TestPlan.InformationMeasure;
import io.tallyward.engine.plan.TestPlan.Sides;
import io.tallyward.engine.plan.TestPlan.SpendingClock;
import io.tallyward.engine.plan.TrustLimits;
import io.tallyward.service.config.document.Key;
import io.tallyward.service.config.document.ListType;
import io.tallyward.service.config.document.MapType;
import io.tallyward.service.config.document.Range;
import io.tallyward.service.config.document.ScalarType;
import io.tallyward.service.config.document.Shape;
import io.tallyward.service.config.document.Values;
import java.time.Duration;
import java.time.Instant;
import java.util.List;
import java.util.Locale;
import java.util.Map;

/** Every key of a plan file: its name, type, default and meaning. */
public final class PlanKeys {

    private static final Duration MILLISECOND = Duration.ofMillis(1);
    private static final Duration SECOND = Duration.ofSeconds(1);
    private static final Duration WEEK = Duration.ofDays(7);
    private static final Duration YEAR = Duration.ofDays(365);

    /** Two variants make a comparison; beyond ten the split alpha leaves too little for each. */
    private static final int MAX_VARIANTS = 10;

    static final class Count {
        static final Key<CountBy> BY = Key.withDefault(
                "by",
                oneOf(CountBy.class, PlanKeys::code),
                "unit",
                "What one trial is: a unit exposed at least once, or a view; variances of views go by units.");
        static final Key<Duration> ATTRIBUTION = Key.withDefault(
                "attribution",
                duration(MILLISECOND, WEEK),
                "PT30M",
                "How long after its first exposure a click of the unit still counts.");
        static final Key<Duration> GRACE = Key.withDefault(
                "grace",
                duration(MILLISECOND, WEEK),
                "PT10M",
                "How long a window waits for events that arrive out of order.");
        static final Key<Duration> WINDOW = Key.withDefault(
                "window", duration(SECOND, Duration.ofDays(1)), "PT5M", "Width of a window; divides a day.");
        static final Shape SHAPE = Shape.of(BY, ATTRIBUTION, GRACE, WINDOW);
    }

    static final class Variants {
        static final Key<Double> SHARE =
                Key.required("share", numberBetween(0, 1), "Planned share of the units; all shares add up to 1.");
        static final Key<Boolean> CONTROL =
                Key.withDefault("control", flag(), "false", "Whether the others are compared with this one.");
        static final Shape SHAPE = Shape.of(SHARE, CONTROL);
    }

    static final class Direction {
        static final Key<Double> ALPHA =
                Key.optional("alpha", numberBetween(0, 0.5), "Level of this direction; both add up to test.alpha.");
        static final Key<Spending> SPENDING =
                Key.optional("spending", new SpendingType(), "How it is spent over the looks; test.spending else.");
        static final Key<Double> SILENT_BEFORE = Key.withDefault(
                "silent-before",
                number("number from 0 to 1", Range.closed(0, 1)),
                "0",
                "Fraction of the clock before which nothing is spent; it is saved, not lost.");
        static final Shape SHAPE = Shape.of(ALPHA, SPENDING, SILENT_BEFORE);
    }

    static final class Test {
        static final Key<Double> ALPHA =
                Key.required("alpha", level(), "False-alarm rate over all challengers, looks and both directions.");
        static final Key<Sides> SIDES = Key.withDefault(
                "sides",
                oneOf(Sides.class, PlanKeys::code),
                "two",
                "Whether harm is tested beside benefit (two) or not (one).");
        static final Key<Double> POWER = Key.withDefault(
                "power", numberBetween(0.5, 1), "0.8", "Probability to find an effect of the smallest size.");
        static final Key<Double> BASELINE =
                Key.required("baseline", numberBetween(0, 1), "Assumed success rate of the control.");
        static final Key<EffectType.Effect> SMALLEST_EFFECT = Key.required(
                "smallest-effect",
                new EffectType(),
                "Smallest difference of rates worth finding: absolute, or {relative: 0.05} of the baseline.");
        static final Key<Spending> SPENDING =
                Key.withDefault("spending", new SpendingType(), "obrien-fleming", "How alpha is spent over the looks.");
        static final Key<Values> BENEFIT = Key.optional(
                "benefit", Direction.SHAPE, "What is different for the direction of benefit; half of alpha else.");
        static final Key<Values> HARM = Key.optional(
                "harm", Direction.SHAPE, "What is different for the direction of harm; half of alpha else.");
        static final Key<AlphaSharing> ALPHA_SHARING = Key.withDefault(
                "alpha-sharing",
                oneOf(AlphaSharing.class, PlanKeys::code),
                "pass-on",
                "Whether a challenger that is found leaves its level to the others (pass-on) or not (split).");
        static final Key<SpendingClock> CLOCK = Key.withDefault(
                "clock",
                oneOf(SpendingClock.class, PlanKeys::code),
                "information",
                "What alpha is spent by: the information, or the calendar (share of run.at-most).");
        static final Key<InformationMeasure> INFORMATION = Key.withDefault(
                "information",
                oneOf(InformationMeasure.class, PlanKeys::code),
                "observed",
                "Measured with the rates observed, or by trials alone at the planned rates.");
        static final Key<Integer> MINIMUM_PER_CELL = Key.withDefault(
                "minimum-per-cell",
                wholeNumber(TestPlan.DEFAULT_MINIMUM_PER_CELL, 1_000_000),
                String.valueOf(TestPlan.DEFAULT_MINIMUM_PER_CELL),
                "Successes and failures that each variant needs before the first look.");
        static final Shape SHAPE = Shape.of(
                ALPHA,
                SIDES,
                POWER,
                BASELINE,
                SMALLEST_EFFECT,
                SPENDING,
                BENEFIT,
                HARM,
                ALPHA_SHARING,
                CLOCK,
                INFORMATION,
                MINIMUM_PER_CELL);
    }

    static final class Looks {
        static final Key<Duration> EVERY =
                Key.optional("every", duration(SECOND, YEAR), "A look at regular intervals of event time.");
        static final Key<List<Double>> FRACTIONS = Key.optional(
                "fractions",
                new ListType<>(share(), 1, PlanRules.MAX_LOOKS, "fractions"),
                "A look at each of these shares of the planned information; ascending, the last one 1.");
        static final Shape SHAPE = Shape.of(EVERY, FRACTIONS).withOneOf(EVERY, FRACTIONS);
    }

    static final class Futility {
        static final Key<Spending> SPENDING =
                Key.optional("spending", new SpendingType(), "By the type II error spent over the looks.");
        static final Key<Double> CONDITIONAL_POWER = Key.optional(
                "conditional-power", threshold(), "When conditional power at the planned end falls below this.");
        static final Key<Assumption> UNDER = Key.withDefault(
                "under",
                oneOf(Assumption.class, PlanKeys::code),
                "design",
                "What conditional power assumes from here on: the trend so far, the design's effect, or none.");
        static final Key<Double> PREDICTIVE_POWER = Key.optional(
                "predictive-power", threshold(), "When predictive power at the planned end falls below this.");
        static final Shape SHAPE = Shape.of(SPENDING, CONDITIONAL_POWER, UNDER, PREDICTIVE_POWER)
                .withOneOf(SPENDING, CONDITIONAL_POWER, PREDICTIVE_POWER);

        private static ScalarType<Double> threshold() {
            return number("number above 0, at most 0.5", Range.above(0, 0.5));
        }
    }

    static final class SplitCheck {
        static final Key<Double> ALPHA = Key.withDefault(
                "alpha",
                numberBetween(0, 0.5),
                String.valueOf(SplitCheckPlan.DEFAULT_ALPHA),
                "False-alarm rate of the split check over the whole run.");
        static final Key<List<String>> SEGMENTS = Key.optional(
                "segments",
                new ListType<>(field(), 1, SplitCheckPlan.MOST_SEGMENTS, "fields"),
                "Segment fields of few values by which a mismatch is traced; none else.");
        static final Shape SHAPE = Shape.of(ALPHA, SEGMENTS);

        private static ScalarType<String> field() {
            return matching(
                    "[A-Za-z0-9_.-]{1,64}",
                    "a field name of at most 64 letters, digits, dots, hyphens and underscores");
        }
    }

    static final class Trust {
        static final Key<Double> CROSSOVER_SHARE = Key.withDefault(
                "crossover-share",
                share(),
                String.valueOf(TrustLimits.DEFAULT.crossoverShare()),
                "Largest tolerated share of crossover events.");
        static final Key<Double> LATE_SHARE = Key.withDefault(
                "late-share",
                share(),
                String.valueOf(TrustLimits.DEFAULT.lateShare()),
                "Largest tolerated share of late events.");
        static final Key<Double> ORPHAN_GAP = Key.withDefault(
                "orphan-gap",
                share(),
                String.valueOf(TrustLimits.DEFAULT_ORPHAN_GAP),
                "Largest tolerated difference of the share of orphans among a variant's clicks and the others'.");
        static final Key<Duration> STARVED_AFTER = Key.withDefault(
                "starved-after",
                duration(SECOND, WEEK),
                TrustLimits.DEFAULT.starvedAfter().toString(),
                "How long a variant may go without trials.");
        static final Shape SHAPE = Shape.of(CROSSOVER_SHARE, LATE_SHARE, ORPHAN_GAP, STARVED_AFTER);
    }

    static final class Run {
        static final Key<Instant> FROM =
                Key.required("from", instant(), "First moment whose events count; aligned to a window.");
        static final Key<Duration> AT_LEAST = Key.withDefault(
                "at-least",
                duration(Duration.ZERO, YEAR),
                "PT0S",
                "No benefit is declared before this much has passed.");
        static final Key<Duration> AT_MOST =
                Key.required("at-most", duration(SECOND, YEAR), "Length of the run; a multiple of the window.");
        static final Key<Boolean> WHOLE_WEEKS = Key.withDefault(
                "whole-weeks",
                flag(),
                "false",
                "Whether the minimum, one week at least, is rounded up to whole weeks, so that it has every day alike.");
        static final Shape SHAPE = Shape.of(FROM, AT_LEAST, WHOLE_WEEKS, AT_MOST);
    }

    static final class Epoch {
        static final Key<Instant> FROM =
                Key.required("from", instant(), "When the new shares take effect; aligned to a window.");
        static final Key<Map<String, Double>> SHARES = Key.required(
                "shares",
                new MapType<>(name(), numberBetween(0, 1), 2, MAX_VARIANTS, "shares"),
                "Planned share of every variant from then on; they add up to 1.");
        static final Shape SHAPE = Shape.of(FROM, SHARES);
    }

    static final class Amended {
        static final Key<Instant> AT = Key.required(
                "at", instant(), "When it takes effect, in event time; minutes ahead of now, aligned to a window.");
        static final Key<String> REASON = Key.required("reason", text(500), "Why, in words.");
        static final Key<Instant> END =
                Key.optional("end", instant(), "The first moment that is no longer part of the run.");
        static final Key<Map<String, Double>> SHARES = Key.optional(
                "shares",
                new MapType<>(name(), numberBetween(0, 1), 2, MAX_VARIANTS, "shares"),
                "Share of every variant from then on; they add up to 1.");
        static final Key<Boolean> STOP =
                Key.optional("stop", flag(), "The owner ends the experiment, whatever the counts say.");
        static final Shape SHAPE = Shape.of(AT, REASON, END, SHARES, STOP).withOneOf(END, SHARES, STOP);
    }

    static final Key<String> EXPERIMENT = Key.required("experiment", name(), "Name of the experiment.");
    static final Key<String> QUESTION = Key.required("question", text(500), "What the owner wants to know, in words.");
    static final Key<String> OWNER = Key.required("owner", text(200), "Who decides; an address.");
    static final Key<Values> COUNT = Key.section("count", Count.SHAPE, "How events become trials and successes.");
    static final Key<Map<String, Values>> VARIANTS = Key.required(
            "variants",
            new MapType<>(name(), Variants.SHAPE, 2, MAX_VARIANTS, "variants"),
            "What is shown at random; exactly one variant is the control.");
    static final Key<Better> BETTER = Key.withDefault(
            "better",
            oneOf(Better.class, PlanKeys::code),
            "higher",
            "Which direction of the success rate is a benefit.");
    static final Key<Values> TEST =
            Key.required("test", Test.SHAPE, "The test of each challenger against the control.");
    static final Key<Values> LOOKS = Key.required("looks", Looks.SHAPE, "When a look is due: every or fractions.");
    static final Key<Values> FUTILITY =
            Key.optional("futility", Futility.SHAPE, "When to give up, by one rule; never without it. Advice only.");
    static final Key<Values> SPLIT_CHECK =
            Key.section("split-check", SplitCheck.SHAPE, "The watch over the traffic split.");
    static final Key<Values> TRUST = Key.section("trust", Trust.SHAPE, "Limits beyond which the data are not trusted.");
    static final Key<Values> RUN = Key.required("run", Run.SHAPE, "When the experiment runs, in event time.");
    static final Key<List<Values>> EPOCHS = Key.optional(
            "epochs",
            new ListType<>(Epoch.SHAPE, 1, 100, "epochs"),
            "Planned changes of the split, ascending by time.");
    static final Key<List<Values>> AMENDMENTS = Key.optional(
            "amendments",
            new ListType<>(Amended.SHAPE, 1, AmendmentRules.MOST, "amendments"),
            "What changes after the plan was frozen, each by one of end, shares and stop; ascending, never removed.");

    /** The shape of the whole file. */
    public static final Shape SHAPE = Shape.of(
            EXPERIMENT,
            QUESTION,
            OWNER,
            COUNT,
            VARIANTS,
            BETTER,
            TEST,
            LOOKS,
            FUTILITY,
            SPLIT_CHECK,
            TRUST,
            RUN,
            EPOCHS,
            AMENDMENTS);

    private PlanKeys() {}

    /** Below a billionth a level is a mistake: no experiment is so sure of its data. */
    private static ScalarType<Double> level() {
        return number("number from 1e-9 to below 0.5", new Range(1e-9, true, 0.5, false));
    }

    private static String code(Enum<?> constant) {
        return constant.name().toLowerCase(Locale.ROOT).replace('_', '-');
    }
}
