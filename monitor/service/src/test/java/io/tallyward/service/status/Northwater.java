package io.tallyward.service.status;

import io.tallyward.engine.count.OutcomeCounts;
import io.tallyward.engine.decide.ExperimentView;
import io.tallyward.engine.decide.ExperimentView.LookPoint;
import io.tallyward.engine.plan.AllocationEpoch;
import io.tallyward.engine.plan.CountRule;
import io.tallyward.engine.plan.FutilityPlan;
import io.tallyward.engine.plan.LookSchedule;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.Run;
import io.tallyward.engine.plan.Spending;
import io.tallyward.engine.plan.SplitCheckPlan;
import io.tallyward.engine.plan.TestPlan;
import io.tallyward.engine.plan.TrustLimits;
import io.tallyward.engine.plan.Variant;
import io.tallyward.engine.record.Adjusted;
import io.tallyward.engine.record.Clustering;
import io.tallyward.engine.record.DecisionRecord.Comparison;
import io.tallyward.engine.record.DecisionRecord.Split;
import io.tallyward.engine.record.DecisionRecord.VariantCount;
import io.tallyward.engine.record.Estimated;
import io.tallyward.engine.record.Outlook;
import io.tallyward.engine.record.SplitOrigin;
import io.tallyward.engine.record.SplitOrigin.PlannedUnits;
import io.tallyward.engine.record.SplitOrigin.SegmentSplit;
import io.tallyward.engine.record.Trust;
import io.tallyward.engine.record.UnitTotals;
import io.tallyward.engine.record.Verdict;
import java.time.Duration;
import java.time.Instant;
import java.util.ArrayList;
import java.util.LinkedHashMap;
import java.util.List;
import java.util.Locale;
import java.util.Map;
import java.util.Optional;

/**
 * Experiments of Northwater, an invented ferry operator. All figures are made up to look plausible together; none was
 * computed by the program.
 */
public final class Northwater {

    public static final Instant START = Instant.parse("2026-05-04T00:00:00Z");

    private static final double[] BENEFIT = {0.9, 0.4, 1.3, 1.1, 1.9, 2.2, 1.8, 2.1, 2.2, 2.1, 2.9};
    private static final double[] NOTHING = {-0.8, 0.3, 0.9, 0.2, -0.4, 0.1, 0.5, -0.2};
    private static final double[] HARM = {-1.2, -2.1, -2.6, -3.1, -3.9};

    private Northwater() {}

    /** One experiment in each of the situations people will meet, by name. */
    public static Map<String, ExperimentView> all() {
        Map<String, ExperimentView> all = new LinkedHashMap<>();
        List.of(quayBanner(), fareChip(), returnPrompt(), cabinUpsell(), deckMap(), pierMap())
                .forEach(view -> all.put(view.plan().experiment(), view));
        return all;
    }

    /** A benefit that was found. */
    public static ExperimentView quayBanner() {
        Plan plan = plan(
                "quay-banner",
                "Does the wide quay photo bring more timetable clicks?",
                List.of(new Variant("plain", 0.5, true), new Variant("wide", 0.5, false)),
                List.of());
        List<VariantCount> counts =
                List.of(new VariantCount(0, "plain", 30_412, 3_655), new VariantCount(0, "wide", 30_377, 3_919));
        return view(plan, counts, Trust.SOUND, "", Verdict.STOP_BENEFIT, Map.of("wide", BENEFIT));
    }

    /** No effect so far. */
    public static ExperimentView fareChip() {
        Plan plan = plan(
                "fare-chip",
                "Does a chip with the lowest fare bring more bookings?",
                List.of(new Variant("none", 0.5, true), new Variant("chip", 0.5, false)),
                List.of());
        List<VariantCount> counts =
                List.of(new VariantCount(0, "none", 22_105, 2_641), new VariantCount(0, "chip", 22_240, 2_643));
        return view(plan, counts, Trust.SOUND, "", Verdict.CONTINUE, Map.of("chip", NOTHING));
    }

    /** Harm that was found. */
    public static ExperimentView returnPrompt() {
        Plan plan = plan(
                "return-prompt",
                "Does asking for the return trip first sell more return trips?",
                List.of(new Variant("later", 0.5, true), new Variant("first", 0.5, false)),
                List.of());
        List<VariantCount> counts =
                List.of(new VariantCount(0, "later", 14_020, 1_690), new VariantCount(0, "first", 13_991, 1_480));
        return view(plan, counts, Trust.SOUND, "", Verdict.STOP_HARM, Map.of("first", HARM));
    }

    /** Where the broken split of {@link #cabinUpsell} comes from. */
    public static final SplitOrigin ORIGIN = new SplitOrigin(
            0,
            Instant.parse("2026-05-05T08:00:00Z"),
            Instant.parse("2026-05-05T08:20:00Z"),
            61.2,
            List.of(new PlannedUnits("outside", 0.5, 9_100), new PlannedUnits("inside", 0.5, 7_750)),
            new SegmentSplit(
                    "platform",
                    "app",
                    List.of(new PlannedUnits("outside", 0.5, 7_000), new PlannedUnits("inside", 0.5, 5_000)),
                    List.of(new PlannedUnits("outside", 0.5, 11_930), new PlannedUnits("inside", 0.5, 12_604)),
                    333.3,
                    1e-73,
                    2e-66,
                    5,
                    true));

    /** A broken split, with a verdict that waits. */
    public static ExperimentView cabinUpsell() {
        Plan plan = plan(
                "cabin-upsell",
                "Does showing the cabin inside sell more cabins?",
                List.of(new Variant("outside", 0.5, true), new Variant("inside", 0.5, false)),
                List.of());
        List<VariantCount> counts =
                List.of(new VariantCount(0, "outside", 18_930, 2_280), new VariantCount(0, "inside", 17_604, 2_301));
        return view(
                plan,
                counts,
                Trust.MISMATCH,
                "the observed split contradicts the planned one (sequential p-value 4.1e-09, limit 0.0010); it began between"
                        + " 2026-05-05T08:00:00Z and 2026-05-05T08:20:00Z, with platform app: inside has 41.67 % of 12000"
                        + " units, planned 50.00 %",
                Verdict.CONTINUE,
                Map.of("inside", new double[] {0.7, 1.8, 2.6, 3.4, 4.2}));
    }

    /** Three variants and a planned change of the split. */
    public static ExperimentView deckMap() {
        Plan plan = plan(
                "deck-map",
                "Which deck map helps people to choose a seat?",
                List.of(
                        new Variant("list", 0.8, true),
                        new Variant("map", 0.1, false),
                        new Variant("tour", 0.1, false)),
                List.of(new AllocationEpoch(
                        START.plus(Duration.ofDays(2)), Map.of("list", 0.34, "map", 0.33, "tour", 0.33))));
        List<VariantCount> counts = List.of(
                new VariantCount(0, "list", 8_020, 955),
                new VariantCount(0, "map", 1_011, 130),
                new VariantCount(0, "tour", 987, 117),
                new VariantCount(1, "list", 9_410, 1_133),
                new VariantCount(1, "map", 9_120, 1_244),
                new VariantCount(1, "tour", 9_177, 1_089));
        Map<String, double[]> paths = new LinkedHashMap<>();
        paths.put("map", new double[] {0.6, 1.4, 1.7, 2.3});
        paths.put("tour", new double[] {0.2, -0.3, -0.9, -0.4});
        return view(plan, counts, Trust.SOUND, "", Verdict.CONTINUE, paths);
    }

    /** One variant was found and has left its level to the other, which goes on. */
    public static ExperimentView deckMapPassedOn() {
        ExperimentView before = deckMap();
        Comparison map = look("map", 4, 3.9, Verdict.STOP_BENEFIT, Trust.SOUND, 4, 0.025);
        Comparison tour = before.comparisons().get("tour");
        Map<String, Comparison> latest = new LinkedHashMap<>();
        latest.put("map", map);
        latest.put("tour", with(tour, 2 * tour.level(), new Outlook(0.004, 0.55, 0.012, 0.02), null));
        return new ExperimentView(
                before.plan(),
                before.planDigest(),
                before.completeUntil(),
                before.counts(),
                before.outcomes(),
                before.split(),
                before.trust(),
                before.trustReason(),
                Verdict.CONTINUE,
                latest,
                Map.of("map", Verdict.STOP_BENEFIT, "tour", Verdict.CONTINUE),
                Map.of(),
                before.history().stream()
                        .map(point -> point.comparison().look() == 4
                                ? new LookPoint(
                                        point.windowEnd(),
                                        latest.get(point.comparison().variant()))
                                : point)
                        .toList(),
                before.looksTaken(),
                before.looksDelayed(),
                before.delayReason(),
                before.maximumInformation(),
                before.lastRecord());
    }

    /** The same look at another level, with another outlook and other adjusted estimates. */
    public static Comparison with(Comparison look, double level, Outlook outlook, Adjusted adjusted) {
        return new Comparison(
                look.variant(),
                look.look(),
                look.z(),
                look.information(),
                look.informationFraction(),
                look.spendingTime(),
                level,
                look.alphaSpent(),
                look.upper(),
                look.lower(),
                look.futility(),
                look.difference(),
                look.differenceLower(),
                look.differenceUpper(),
                look.lift(),
                outlook,
                adjusted,
                look.verdict(),
                look.held(),
                look.reason());
    }

    /** Views are counted, several a unit; not among {@link #all}. */
    public static ExperimentView boardNews() {
        Plan units = plan(
                "board-news",
                "Do longer news on the departure board bring more clicks a view?",
                List.of(new Variant("short", 0.5, true), new Variant("long", 0.5, false)),
                List.of());
        Plan plan = new Plan(
                units.experiment(),
                units.question(),
                units.owner(),
                new CountRule(
                        CountRule.CountBy.VIEW,
                        units.count().attribution(),
                        units.count().grace(),
                        units.count().window()),
                units.variants(),
                units.test(),
                units.looks(),
                units.futility(),
                units.splitCheck(),
                units.trust(),
                units.run(),
                units.epochs());
        List<VariantCount> counts = List.of(
                new VariantCount(0, "short", 61_240, 7_402, new UnitTotals(14_020, 520_000, 64_000, 15_000)),
                new VariantCount(0, "long", 60_987, 7_411, new UnitTotals(14_105, 515_000, 63_500, 14_900)));
        ExperimentView before = view(plan, counts, Trust.SOUND, "", Verdict.CONTINUE, Map.of("long", NOTHING));
        return new ExperimentView(
                plan,
                before.planDigest(),
                before.completeUntil(),
                before.counts(),
                before.outcomes(),
                before.split(),
                before.trust(),
                before.trustReason(),
                before.verdict(),
                Map.of("long", clustered(before.comparisons().get("long"), new Clustering(-0.31, 2.4))),
                before.verdicts(),
                before.held(),
                before.history(),
                before.looksTaken(),
                before.looksDelayed(),
                before.delayReason(),
                before.maximumInformation(),
                before.lastRecord());
    }

    private static Comparison clustered(Comparison look, Clustering clustering) {
        return new Comparison(
                look.variant(),
                look.look(),
                look.z(),
                look.information(),
                look.informationFraction(),
                look.spendingTime(),
                look.level(),
                look.alphaSpent(),
                look.upper(),
                look.lower(),
                look.futility(),
                look.difference(),
                look.differenceLower(),
                look.differenceUpper(),
                look.lift(),
                look.outlook(),
                look.adjusted(),
                clustering,
                look.verdict(),
                look.held(),
                look.reason());
    }

    /** Before the first look. */
    public static ExperimentView pierMap() {
        Plan plan = plan(
                "pier-map",
                "Does a map of the pier save calls to the desk?",
                List.of(new Variant("text", 0.5, true), new Variant("map", 0.5, false)),
                List.of());
        return waiting(plan);
    }

    /** Any plan before its first look. */
    public static ExperimentView waiting(Plan plan) {
        return view(plan, List.of(), Trust.SOUND, "", Verdict.WAITING, Map.of());
    }

    /** The same experiment with another verdict and another state of trust. */
    public static ExperimentView with(ExperimentView view, Verdict verdict, Trust trust) {
        return with(view, verdict, trust, view.verdicts(), view.held());
    }

    /** The same experiment with another verdict, state of trust, and verdicts told and held by variant. */
    public static ExperimentView with(
            ExperimentView view,
            Verdict verdict,
            Trust trust,
            Map<String, Verdict> verdicts,
            Map<String, Verdict> held) {
        return new ExperimentView(
                view.plan(),
                view.planDigest(),
                view.completeUntil(),
                view.counts(),
                view.outcomes(),
                view.split(),
                trust,
                trust == Trust.SOUND ? "" : "Invented reason for " + trust.code() + ".",
                verdict,
                view.comparisons(),
                verdicts,
                held,
                view.history(),
                view.looksTaken(),
                view.looksDelayed(),
                view.delayReason(),
                view.maximumInformation(),
                view.lastRecord());
    }

    public static Plan plan(String name, String question, List<Variant> variants, List<AllocationEpoch> epochs) {
        return new Plan(
                name,
                question,
                "web-growth@northwater.example",
                new CountRule(
                        CountRule.CountBy.UNIT, Duration.ofMinutes(30), Duration.ofMinutes(10), Duration.ofMinutes(5)),
                variants,
                TestPlan.of(0.05, TestPlan.Sides.TWO, Spending.of(Spending.Family.OBRIEN_FLEMING), 0.8, 0.12, 0.006),
                new LookSchedule.Every(Duration.ofHours(6)),
                Optional.of(new FutilityPlan.ErrorSpending(new Spending(Spending.Family.HWANG_SHIH_DECANI, -2))),
                new SplitCheckPlan(SplitCheckPlan.DEFAULT_ALPHA),
                TrustLimits.DEFAULT,
                new Run(START, Duration.ofDays(7), Duration.ofDays(28)),
                epochs);
    }

    private static ExperimentView view(
            Plan plan,
            List<VariantCount> counts,
            Trust trust,
            String trustReason,
            Verdict verdict,
            Map<String, double[]> paths) {
        List<LookPoint> history = new ArrayList<>();
        Map<String, Comparison> latest = new LinkedHashMap<>();
        int looks = paths.values().stream().mapToInt(path -> path.length).max().orElse(0);
        for (int look = 1; look <= looks; look++) {
            for (Map.Entry<String, double[]> path : paths.entrySet()) {
                Comparison comparison = look(
                        path.getKey(), look, path.getValue()[look - 1], verdict, trust, looks, 0.05 / paths.size());
                history.add(new LookPoint(START.plus(Duration.ofHours(12L * look)), comparison));
                latest.put(path.getKey(), comparison);
            }
        }
        Map<String, Verdict> verdicts = new LinkedHashMap<>();
        Map<String, Double> information = new LinkedHashMap<>();
        Map<String, Verdict> held = new LinkedHashMap<>();
        latest.forEach((variant, look) -> {
            if (look.held() != null) {
                held.put(variant, look.held());
            }
        });
        plan.challengers().forEach(challenger -> {
            verdicts.put(challenger.name(), verdict);
            information.put(challenger.name(), 235_000.0);
        });
        return new ExperimentView(
                plan,
                "5b1f".repeat(16),
                looks == 0 ? Optional.empty() : Optional.of(START.plus(Duration.ofHours(12L * looks + 3))),
                counts,
                looks == 0 ? OutcomeCounts.NONE : OutcomeCounts.of(60_789, 7_574, 91_233, 412, 388, 96, 210, 55, 0),
                split(trust, looks),
                trust,
                trustReason,
                verdict,
                latest,
                verdicts,
                held,
                history,
                looks,
                looks == 0 ? 1 : 0,
                looks == 0 ? "plain has 2 successes (expected: 5 or more in every variant)" : "",
                information,
                "c07a".repeat(16));
    }

    private static Split split(Trust trust, int looks) {
        if (looks == 0) {
            return new Split(0, 1, 0, 0, 1);
        }
        return trust == Trust.MISMATCH
                ? new Split(19.31, 4.1e-9, 48.1, 1, 4.0e-12, null, ORIGIN)
                : new Split(-3.2, 1.0, 0.02, 1, 0.887);
    }

    private static Adjusted adjusted(double z, double difference) {
        return new Adjusted(
                0.0123,
                0.95,
                ordered(0.95 * z, 0.4 * z, 1.6 * z),
                ordered(0.95 * difference, 0.4 * difference, 1.6 * difference),
                ordered(8 * difference, 3 * difference, 14 * difference));
    }

    private static Estimated ordered(double value, double one, double other) {
        return new Estimated(value, Math.min(one, other), Math.max(one, other));
    }

    private static Comparison look(
            String variant, int look, double z, Verdict verdict, Trust trust, int looks, double level) {
        double fraction = 0.08 * look;
        double bound = Math.min(8, 1.99 / Math.sqrt(fraction));
        double difference = z * 0.00205 / Math.sqrt(fraction);
        double half = bound * 0.00205 / Math.sqrt(fraction);
        boolean last = look == looks;
        boolean ended = last && (verdict.settled() || trust == Trust.MISMATCH);
        boolean benefitMayStop = look >= 4;
        return new Comparison(
                variant,
                look,
                z,
                235_000.0 * fraction,
                fraction,
                fraction,
                level,
                level * fraction * fraction * fraction,
                benefitMayStop ? bound : null,
                -bound,
                fraction > 0.3 ? -2.2 + 3 * fraction : null,
                difference,
                difference - half,
                benefitMayStop ? difference + half : null,
                new Estimated(difference / 0.12, (difference - half) / 0.12, null),
                ended ? null : new Outlook(0.42, 0.81, 0.03, 0.39),
                ended ? adjusted(z, difference) : null,
                last ? verdict : Verdict.CONTINUE,
                last && trust == Trust.MISMATCH ? Verdict.STOP_BENEFIT : null,
                ended
                        ? String.format(Locale.ROOT, "z %.3f has reached the boundary", z)
                        : String.format(Locale.ROOT, "z %.3f lies between the boundaries", z));
    }
}
