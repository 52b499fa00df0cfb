package io.tallyward.service.plan;

import static io.tallyward.service.config.document.ScalarType.written;

import io.tallyward.engine.plan.CountRule.CountBy;
import io.tallyward.engine.plan.TestPlan.Better;
import io.tallyward.engine.plan.TestPlan.InformationMeasure;
import io.tallyward.service.config.document.Key;
import io.tallyward.service.config.document.Values;
import java.time.Duration;
import java.time.Instant;
import java.util.Collection;
import java.util.List;
import java.util.Locale;
import java.util.Map;
import java.util.Optional;
import java.util.TreeSet;
import java.util.stream.Stream;

/** What must hold between the keys of a plan. Rules about keys that were refused already are left out. */
final class PlanRules {

    /** How far shares may add up to something else than 1: rounding of decimals in binary, and nothing more. */
    private static final double SHARE_TOLERANCE = 1e-9;

    /** Looks closer than this would wait for one another; a little less, as decimals are rounded in binary. */
    private static final double LEAST_STEP = 0.001 - 1e-12;

    /** More looks than this say nothing new and make the design slow to compute. */
    static final int MAX_LOOKS = 1_000;

    /** More windows than this waiting to be sealed would not fit into one record of the state. */
    private static final long MAX_OPEN_WINDOWS = 5_000;

    private final Values plan;
    private final Optional<Duration> window;

    private PlanRules(Values plan) {
        this.plan = plan;
        this.window = plan.find(PlanKeys.COUNT)
                .flatMap(count -> count.find(PlanKeys.Count.WINDOW))
                .filter(width -> isMultiple(Duration.ofDays(1), width));
    }

    /** Refuses what breaks a rule. */
    static void check(Values plan) {
        PlanRules rules = new PlanRules(plan);
        plan.find(PlanKeys.COUNT).ifPresent(rules::checkCount);
        plan.find(PlanKeys.VARIANTS).ifPresent(rules::checkVariants);
        plan.find(PlanKeys.TEST).ifPresent(rules::checkTest);
        plan.find(PlanKeys.TEST).ifPresent(DirectionRules::check);
        plan.find(PlanKeys.FUTILITY).ifPresent(PlanRules::checkFutility);
        plan.find(PlanKeys.SPLIT_CHECK).ifPresent(PlanRules::checkSplitCheck);
        plan.find(PlanKeys.RUN).ifPresent(rules::checkRun);
        plan.find(PlanKeys.LOOKS).ifPresent(rules::checkLooks);
        plan.find(PlanKeys.EPOCHS).ifPresent(rules::checkEpochs);
        plan.find(PlanKeys.AMENDMENTS).ifPresent(AmendmentReader::checkChanges);
    }

    private void checkCount(Values count) {
        count.find(PlanKeys.Count.BY)
                .filter(by -> by == CountBy.VIEW)
                .flatMap(by -> plan.find(PlanKeys.TEST))
                .ifPresent(PlanRules::checkMeasureOfViews);
        count.find(PlanKeys.Count.WINDOW)
                .filter(width -> !isMultiple(Duration.ofDays(1), width))
                .ifPresent(
                        width -> count.refuse(PlanKeys.Count.WINDOW, written(width), "a duration that divides a day"));
        window.ifPresent(width -> checkOpenWindows(count, width));
    }

    /** How much a view tells depends on how alike the views of a unit are, which no plan knows. */
    private static void checkMeasureOfViews(Values test) {
        test.find(PlanKeys.Test.INFORMATION)
                .filter(measure -> measure == InformationMeasure.TRIALS)
                .ifPresent(measure -> test.refuse(
                        PlanKeys.Test.INFORMATION,
                        "trials",
                        "observed, as count.by is view",
                        "Views of a unit are not independent, so their number does not say how much is known."));
    }

    private static void checkOpenWindows(Values count, Duration width) {
        Optional<Duration> attribution = count.find(PlanKeys.Count.ATTRIBUTION);
        Optional<Duration> grace = count.find(PlanKeys.Count.GRACE);
        if (attribution.isEmpty() || grace.isEmpty()) {
            return;
        }
        Duration open = attribution.get().plus(grace.get());
        if (open.dividedBy(width) > MAX_OPEN_WINDOWS) {
            count.refuse(
                    PlanKeys.Count.WINDOW,
                    written(width),
                    "at most " + MAX_OPEN_WINDOWS + " windows in attribution and grace, " + written(open),
                    "Choose a wider window.");
        }
    }

    private void checkVariants(Map<String, Values> variants) {
        long controls = variants.values().stream()
                .filter(variant -> variant.find(PlanKeys.Variants.CONTROL).orElse(false))
                .count();
        if (controls != 1) {
            plan.refuse(
                    PlanKeys.VARIANTS,
                    controls == 0 ? "no control" : controls + " controls",
                    "exactly one variant with control: true");
        }
        List<Double> shares = variants.values().stream()
                .flatMap(variant -> variant.find(PlanKeys.Variants.SHARE).stream())
                .toList();
        if (shares.size() == variants.size()) {
            checkSum(plan, PlanKeys.VARIANTS, shares);
        }
    }

    private void checkTest(Values test) {
        Optional<Double> baseline = test.find(PlanKeys.Test.BASELINE);
        Optional<EffectType.Effect> effect = test.find(PlanKeys.Test.SMALLEST_EFFECT);
        if (baseline.isEmpty() || effect.isEmpty()) {
            return;
        }
        boolean lower = plan.find(PlanKeys.BETTER).filter(Better.LOWER::equals).isPresent();
        double difference = effect.get().difference(baseline.get());
        double rate = lower ? baseline.get() - difference : baseline.get() + difference;
        if (!(rate > 0 && rate < 1)) {
            test.refuse(
                    PlanKeys.Test.SMALLEST_EFFECT,
                    effect.get().toString(),
                    lower ? "less than the baseline" : "a number that leaves baseline + smallest-effect below 1");
        }
    }

    private static void checkFutility(Values futility) {
        long rules = Stream.of(
                        PlanKeys.Futility.SPENDING,
                        PlanKeys.Futility.CONDITIONAL_POWER,
                        PlanKeys.Futility.PREDICTIVE_POWER)
                .filter(futility::gives)
                .count();
        if (rules != 1) {
            futility.refuse(
                    rules == 0 ? "no rule" : rules + " rules",
                    "one of spending, conditional-power and predictive-power");
        }
        if (futility.gives(PlanKeys.Futility.UNDER) && !futility.gives(PlanKeys.Futility.CONDITIONAL_POWER)) {
            futility.refuse(
                    PlanKeys.Futility.UNDER,
                    futility.find(PlanKeys.Futility.UNDER)
                            .map(String::valueOf)
                            .orElse("given")
                            .toLowerCase(Locale.ROOT),
                    "nothing: only conditional-power assumes an effect");
        }
    }

    private static void checkSplitCheck(Values splitCheck) {
        splitCheck
                .find(PlanKeys.SplitCheck.SEGMENTS)
                .filter(fields -> new TreeSet<>(fields).size() < fields.size())
                .ifPresent(fields ->
                        splitCheck.refuse(PlanKeys.SplitCheck.SEGMENTS, String.join(", ", fields), "different fields"));
    }

    private void checkRun(Values run) {
        Optional<Duration> atMost = run.find(PlanKeys.Run.AT_MOST);
        run.find(PlanKeys.Run.FROM).filter(this::isUnaligned).ifPresent(from -> {
            run.refuse(PlanKeys.Run.FROM, from.toString(), aligned());
        });
        atMost.filter(length -> window.isPresent() && !isMultiple(length, window.get()))
                .ifPresent(length -> run.refuse(PlanKeys.Run.AT_MOST, written(length), multiple()));
        minimumRun(run)
                .filter(least -> atMost.isPresent() && least.compareTo(atMost.get()) > 0)
                .ifPresent(least -> run.refuse(
                        run.gives(PlanKeys.Run.AT_LEAST) ? PlanKeys.Run.AT_LEAST : PlanKeys.Run.WHOLE_WEEKS,
                        written(least),
                        "at most run.at-most, " + written(atMost.orElseThrow())));
    }

    /** The minimum run, in whole weeks if the plan asks for them; empty when its keys were refused. */
    static Optional<Duration> minimumRun(Values run) {
        boolean weeks = run.find(PlanKeys.Run.WHOLE_WEEKS).orElse(false);
        return run.find(PlanKeys.Run.AT_LEAST).map(least -> {
            long week = Duration.ofDays(7).toMillis();
            return weeks
                    ? Duration.ofMillis(Math.max(1, Math.floorDiv(least.toMillis() + week - 1, week)) * week)
                    : least;
        });
    }

    private void checkLooks(Values looks) {
        Optional<Duration> every = looks.find(PlanKeys.Looks.EVERY);
        Optional<List<Double>> fractions = looks.find(PlanKeys.Looks.FRACTIONS);
        if (looks.gives(PlanKeys.Looks.EVERY) == looks.gives(PlanKeys.Looks.FRACTIONS)) {
            looks.refuse(
                    looks.gives(PlanKeys.Looks.EVERY) ? "both are given" : "neither is given",
                    "either every or fractions");
        }
        every.ifPresent(interval -> checkInterval(looks, interval));
        fractions
                .filter(list -> !isAscendingToOne(list))
                .ifPresent(list -> looks.refuse(
                        PlanKeys.Looks.FRACTIONS,
                        list.toString(),
                        "fractions that ascend by 0.001 or more, the last one 1"));
    }

    private void checkInterval(Values looks, Duration interval) {
        if (window.isPresent() && !isMultiple(interval, window.get())) {
            looks.refuse(PlanKeys.Looks.EVERY, written(interval), multiple());
        }
        Optional<Duration> atMost = plan.find(PlanKeys.RUN).flatMap(run -> run.find(PlanKeys.Run.AT_MOST));
        if (atMost.isEmpty()) {
            return;
        }
        String length = written(atMost.get());
        if (interval.compareTo(atMost.get()) > 0) {
            looks.refuse(PlanKeys.Looks.EVERY, written(interval), "at most run.at-most, " + length);
        }
        if (atMost.get().minusMillis(1).dividedBy(interval) >= MAX_LOOKS) {
            looks.refuse(
                    PlanKeys.Looks.EVERY,
                    written(interval),
                    "at most " + MAX_LOOKS + " looks in run.at-most, " + length,
                    "Choose a longer interval.");
        }
    }

    private void checkEpochs(List<Values> epochs) {
        Optional<Values> run = plan.find(PlanKeys.RUN);
        Optional<Instant> start = run.flatMap(section -> section.find(PlanKeys.Run.FROM));
        Optional<Instant> end = start.flatMap(from ->
                run.flatMap(section -> section.find(PlanKeys.Run.AT_MOST)).map(from::plus));
        Optional<Instant> previous = start;
        for (Values epoch : epochs) {
            Optional<Instant> from = epoch.find(PlanKeys.Epoch.FROM);
            if (from.isPresent()) {
                checkMoment(epoch, from.get(), previous, end);
                previous = from;
            }
            epoch.find(PlanKeys.Epoch.SHARES).ifPresent(shares -> checkShares(epoch, shares));
        }
    }

    private void checkMoment(Values epoch, Instant from, Optional<Instant> previous, Optional<Instant> end) {
        if (isUnaligned(from)) {
            epoch.refuse(PlanKeys.Epoch.FROM, from.toString(), aligned());
        }
        if (previous.isPresent() && !from.isAfter(previous.get())) {
            epoch.refuse(
                    PlanKeys.Epoch.FROM,
                    from.toString(),
                    "after " + previous.get() + ", where the epoch before starts");
        }
        if (end.isPresent() && !from.isBefore(end.get())) {
            epoch.refuse(PlanKeys.Epoch.FROM, from.toString(), "before the end of the run, " + end.get());
        }
    }

    private void checkShares(Values epoch, Map<String, Double> shares) {
        Optional<Map<String, Values>> variants = plan.find(PlanKeys.VARIANTS);
        if (variants.isPresent() && !variants.get().keySet().equals(shares.keySet())) {
            epoch.refuse(
                    PlanKeys.Epoch.SHARES,
                    "shares of " + names(shares.keySet()),
                    "the share of every variant: " + names(variants.get().keySet()));
            return;
        }
        checkSum(epoch, PlanKeys.Epoch.SHARES, shares.values());
    }

    private static void checkSum(Values values, Key<?> key, Collection<Double> shares) {
        double sum = shares.stream().mapToDouble(Double::doubleValue).sum();
        if (!(Math.abs(sum - 1) <= SHARE_TOLERANCE)) {
            values.refuse(key, "shares that add up to " + sum, "shares that add up to 1");
        }
    }

    private boolean isUnaligned(Instant moment) {
        return window.filter(width -> Math.floorMod(moment.toEpochMilli(), width.toMillis()) != 0)
                .isPresent();
    }

    private static boolean isMultiple(Duration whole, Duration part) {
        return whole.toMillis() % part.toMillis() == 0;
    }

    private static boolean isAscendingToOne(List<Double> fractions) {
        for (int i = 1; i < fractions.size(); i++) {
            if (!(fractions.get(i) - fractions.get(i - 1) >= LEAST_STEP)) {
                return false;
            }
        }
        return fractions.get(fractions.size() - 1) == 1;
    }

    private String aligned() {
        return "a moment at the start of a window of " + written(window.orElseThrow());
    }

    private String multiple() {
        return "a multiple of count.window, " + written(window.orElseThrow());
    }

    private static String names(Collection<String> names) {
        return String.join(", ", new TreeSet<>(names));
    }
}
