package io.tallyward.engine.plan;

import java.util.ArrayList;
import java.util.LinkedHashMap;
import java.util.List;
import java.util.Locale;
import java.util.Map;
import java.util.TreeMap;
import java.util.TreeSet;
import java.util.stream.Collectors;

/** The terms of a plan that are frozen, each under the key that it has in a plan file, so that two plans can be told apart. */
public final class PlanTerms {

    private static final String ABSENT = "absent";

    private PlanTerms() {}

    /**
     * A term in which two plans differ.
     *
     * @param key where it stands in a plan file, as in {@code test.alpha}
     * @param frozen what it is in the plan that stands
     * @param proposed what it would be
     */
    public record Difference(String key, String frozen, String proposed) {
        @Override
        public String toString() {
            return key + " is " + frozen + ", not " + proposed;
        }
    }

    /** Every term of a plan by its key, in the order of the keys of a plan file; amendments are no terms. */
    public static Map<String, String> of(Plan plan) {
        Map<String, String> terms = new LinkedHashMap<>();
        terms.put("experiment", plan.experiment());
        terms.put("question", plan.question());
        terms.put("owner", plan.owner());
        CountRule count = plan.count();
        terms.put("count.by", code(count.by()));
        terms.put("count.attribution", count.attribution().toString());
        terms.put("count.grace", count.grace().toString());
        terms.put("count.window", count.window().toString());
        terms.put("variants", plan.variants().stream().map(Variant::name).collect(Collectors.joining(", ")));
        for (Variant variant : plan.variants()) {
            terms.put("variants." + variant.name() + ".share", String.valueOf(variant.share()));
            terms.put("variants." + variant.name() + ".control", String.valueOf(variant.control()));
        }
        addTest(terms, plan.test());
        addLooks(terms, plan.looks());
        terms.put("futility", plan.futility().map(FutilityPlan::code).orElse(ABSENT));
        terms.put("split-check.alpha", String.valueOf(plan.splitCheck().alpha()));
        terms.put("split-check.segments", String.join(", ", plan.splitCheck().segments()));
        terms.put("trust.crossover-share", String.valueOf(plan.trust().crossoverShare()));
        terms.put("trust.late-share", String.valueOf(plan.trust().lateShare()));
        terms.put("trust.orphan-gap", String.valueOf(plan.trust().orphanGap()));
        terms.put("trust.starved-after", plan.trust().starvedAfter().toString());
        terms.put("run.from", plan.run().from().toString());
        terms.put("run.at-least", plan.run().atLeast().toString());
        terms.put("run.at-most", plan.run().atMost().toString());
        terms.put("epochs", plan.epochs().stream().map(PlanTerms::written).collect(Collectors.joining("; ")));
        return terms;
    }

    private static void addTest(Map<String, String> terms, TestPlan test) {
        terms.put("better", code(test.better()));
        terms.put("test.alpha", String.valueOf(test.alpha()));
        terms.put("test.sides", code(test.sides()));
        addTail(terms, "test.benefit", test.benefit());
        test.harm().ifPresent(harm -> addTail(terms, "test.harm", harm));
        terms.put("test.alpha-sharing", code(test.sharing()));
        terms.put("test.clock", code(test.clock()));
        terms.put("test.information", code(test.measure()));
        terms.put("test.power", String.valueOf(test.power()));
        terms.put("test.baseline", String.valueOf(test.baseline()));
        terms.put("test.smallest-effect", String.valueOf(test.smallestEffect()));
        terms.put("test.minimum-per-cell", String.valueOf(test.minimumPerCell()));
    }

    private static void addTail(Map<String, String> terms, String key, Tail tail) {
        terms.put(key + ".alpha", String.valueOf(tail.alpha()));
        terms.put(key + ".spending", tail.spending().code());
        terms.put(key + ".silent-before", String.valueOf(tail.silentBefore()));
    }

    private static void addLooks(Map<String, String> terms, LookSchedule looks) {
        if (looks instanceof LookSchedule.Every every) {
            terms.put("looks.every", every.interval().toString());
        } else if (looks instanceof LookSchedule.AtFractions fractions) {
            terms.put("looks.fractions", fractions.fractions().toString());
        }
    }

    private static String written(AllocationEpoch epoch) {
        return epoch.from() + " " + new TreeMap<>(epoch.shares());
    }

    private static String code(Enum<?> constant) {
        return constant.name().toLowerCase(Locale.ROOT).replace('_', '-');
    }

    /** The terms in which a proposed plan differs from the one that stands. */
    public static List<Difference> differences(Plan frozen, Plan proposed) {
        Map<String, String> before = of(frozen);
        Map<String, String> after = of(proposed);
        TreeSet<String> added = new TreeSet<>(after.keySet());
        added.removeAll(before.keySet());
        List<String> keys = new ArrayList<>(before.keySet());
        keys.addAll(added);
        return keys.stream()
                .map(key -> new Difference(key, before.getOrDefault(key, ABSENT), after.getOrDefault(key, ABSENT)))
                .filter(difference -> !difference.frozen().equals(difference.proposed()))
                .toList();
    }
}
